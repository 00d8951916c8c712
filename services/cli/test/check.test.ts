import { createServer } from "node:net";
import { afterAll, describe, expect, it } from "vitest";
import { demoConfigText } from "../src/demo/demo-config.js";
import { moorline, TestFolder } from "./capture-io.js";

const folder = new TestFolder();
afterAll(() => folder.remove());

const kafkaConfig = (broker: string) => `store: sqlite:./none.db
streams:
  - name: s
    source: { kafka: { brokers: ["${broker}"], topics: [t], group: g } }
    features: [ { name: x } ]
`;

describe("moorline check", () => {
  it("says what is there and what is still to be done, with 0", async () => {
    const config = folder.write("moorline.yaml", demoConfigText());
    const { status, out, err } = await moorline(["check", "--config", config]);
    expect([status, err]).toEqual([0, ""]);
    expect(out).toMatch(/^ok +config .*streams 1, features 7$/m);
    expect(out).toMatch(/^note +store .*moorline\.db is not there yet/m);
    expect(out).toMatch(/^note +file .*part-0\.ndjson is not there yet: it is waited for$/m);
  });

  it("says that a broker cannot be reached and what to look at, with 3", async () => {
    // A port that was just free: nothing listens there.
    const server = createServer().listen(0, "127.0.0.1");
    await new Promise((resolve) => server.once("listening", resolve));
    const { port } = server.address() as { port: number };
    await new Promise((resolve) => server.close(resolve));
    const config = folder.write("kafka.yaml", kafkaConfig(`127.0.0.1:${port}`));
    const { status, out, err } = await moorline(["check", "--config", config]);
    expect(status).toBe(3);
    expect(out).toMatch(
      /^fail +broker +127\.0\.0\.1:\d+ cannot be reached \(.+\): check the address under brokers/m,
    );
    expect(err).toBe("moorline: 1 of 3 checks failed; put right what the lines above say\n");
  });

  it("lists every problem of a config with its line, with 2", async () => {
    const config = folder.write("bad.yaml", "stroe: x\nstreams:\n  - name: a b\n");
    const { status, out, err } = await moorline(["check", "--config", config]);
    expect([status, out]).toEqual([2, ""]);
    expect(err).toMatch(/bad\.yaml has 4 problems that must be put right first/);
    expect(err).toMatch(/bad\.yaml:1:1 stroe: is not a known key: did you mean store\?/);
    expect(err).toMatch(/bad\.yaml:3:11 streams\[0\]\.name: /);
  });
});
