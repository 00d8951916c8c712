import { spawnSync } from "node:child_process";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";

const source = new URL("../../src/kafka/unhandled-failures.ts", import.meta.url).href;
const root = fileURLToPath(new URL("../../../..", import.meta.url));

/** In a process of its own: what is tested is what ends a process. */
function run(code: string) {
  const script = `import { onUnhandledKafkaFailure } from ${JSON.stringify(source)}; ${code}`;
  const args = ["--import", "tsx", "--input-type=module", "-e", script];
  return spawnSync(process.execPath, args, { cwd: root, encoding: "utf8" });
}

describe("onUnhandledKafkaFailure()", () => {
  it("onUnhandledKafkaFailure() gives kafkajs's lost failures to the listener and lets the process live", () => {
    const { status, stdout } = run(`
      onUnhandledKafkaFailure((error) => console.log("heard", error.message));
      Promise.reject(Object.assign(new Error("closed"), { name: "KafkaJSConnectionError" }));
      setTimeout(() => console.log("alive"), 50);`);
    expect([status, stdout]).toEqual([0, "heard closed\nalive\n"]);
  });

  it("onUnhandledKafkaFailure() leaves any other unhandled rejection to end the process", () => {
    const { status, stderr } = run(`
      onUnhandledKafkaFailure(() => {});
      Promise.reject(new TypeError("a bug of ours"));
      setTimeout(() => {}, 2000);`);
    expect(status).not.toBe(0);
    expect(stderr).toContain("a bug of ours");
  });
});
