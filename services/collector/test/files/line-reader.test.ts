import { appendFile, mkdtemp, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { LineReader } from "../../src/files/line-reader.js";

async function fileOf(content: string | Buffer): Promise<string> {
  const path = join(await mkdtemp(join(tmpdir(), "moorline-lines-")), "events.ndjson");
  await writeFile(path, content);
  return path;
}

async function readAll(
  path: string,
  complete: boolean,
): Promise<{ offsets: number[]; lines: string[]; end: number }> {
  const reader = await LineReader.open(path);
  const offsets: number[] = [];
  const lines: string[] = [];
  let position = 0;
  for (;;) {
    const read = await reader.read(position, complete);
    if (read.toOffset === position) break;
    position = read.toOffset;
    for (const { offset, value } of read.records) {
      offsets.push(offset);
      lines.push(Buffer.from(value!).toString());
    }
  }
  await reader.close();
  return { offsets, lines, end: position };
}

describe("LineReader", () => {
  it("read() gives each line with the byte position of its start, also beyond ASCII", async () => {
    const path = await fileOf("a\n\nŁ\r\nlast\n");
    expect(await readAll(path, false)).toEqual({
      offsets: [0, 2, 3, 7],
      lines: ["a", "", "Ł", "last"],
      end: 12,
    });
  });

  it("read() leaves a partial last line until it is whole", async () => {
    const path = await fileOf("one\ntw");
    expect(await readAll(path, false)).toEqual({ offsets: [0], lines: ["one"], end: 4 });

    await appendFile(path, "o\n");
    expect((await readAll(path, false)).lines).toEqual(["one", "two"]);
  });

  it("read() takes a last line without its end when the file is complete", async () => {
    const path = await fileOf("one\ntwo");
    expect(await readAll(path, true)).toEqual({ offsets: [0, 4], lines: ["one", "two"], end: 7 });
  });

  it("read() crosses chunk borders without losing or doubling a byte (30,000 lines of odd lengths)", async () => {
    const expected = Array.from({ length: 30_000 }, (_, i) => `${i}:${"x".repeat((i * 7919) % 61)}`);
    const { lines, offsets, end } = await readAll(await fileOf(`${expected.join("\n")}\n`), false);

    expect(lines).toEqual(expected);
    expect(end).toBe(expected.reduce((sum, line) => sum + line.length + 1, 0));
    expect(offsets[29_999]).toBe(end - expected[29_999]!.length - 1);
  });

  it("read() keeps no more of a huge line than shows that it is too large, and finds the next line", async () => {
    const huge = "y".repeat(3 * 1024 * 1024 + 17);
    const { lines, offsets } = await readAll(await fileOf(`a\n${huge}\nb\n`), false);

    expect(lines.map((line) => line.slice(0, 1))).toEqual(["a", "y", "b"]);
    expect(lines[1]!.length).toBeGreaterThan(1024 * 1024);
    expect(lines[1]!.length).toBeLessThan(1024 * 1024 + 512 * 1024);
    expect(offsets).toEqual([0, 2, 2 + huge.length + 1]);
  });

  it("read() waits for the end of a huge line that is still being written", async () => {
    const path = await fileOf(`a\n${"y".repeat(600_000)}`);
    expect((await readAll(path, false)).lines).toEqual(["a"]);

    await appendFile(path, "z\n");
    expect((await readAll(path, false)).lines[1]).toBe(`${"y".repeat(600_000)}z`);
  });

  it("open() says which file cannot be read and that it may be tried again", async () => {
    await expect(LineReader.open("/nowhere/events.ndjson")).rejects.toMatchObject({
      code: "MOORLINE_UPSTREAM_FILE_SOURCE",
      retryable: true,
    });
  });
});
