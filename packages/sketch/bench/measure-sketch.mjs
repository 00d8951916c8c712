// measure:sketch — speed and accuracy of the sketch and its peers in one run. Progress on stderr, one JSON object as the last line
// of stdout. With --java the Java reference takes part (needs java, javac and mvn); --quick does fewer rounds and seeds.
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import os from "node:os";
import { activeKernel } from "../dist/kernel/active-kernel.js";
import { ACCURACY_ROWS, measureAccuracy } from "./accuracy.mjs";
import { judge } from "./gates.mjs";
import { JAVA_ARTIFACT, startJava } from "./java-peer.mjs";
import { measureAdd, measureMergeAndQuantile } from "./speed.mjs";

const withJava = process.argv.includes("--java");
const quick = process.argv.includes("--quick");
const rounds = quick ? 5 : 9;
const seeds = quick ? 1 : 3;
const say = (line) => process.stderr.write(`${line}\n`);

const java = withJava ? startJava() : null;
const accuracy = [];
const add = await measureAdd(rounds, java, say);
const merge = await measureMergeAndQuantile(rounds, java, say);
for (const row of ACCURACY_ROWS) accuracy.push(await measureAccuracy(row, seeds, java, say));
java?.stop();

const gates = judge({ add, merge, accuracy }, withJava);
for (const { what, value, gate, targetMet, ...bound } of gates) {
  const limit = bound.atLeast === undefined ? `≤ ${bound.atMost}` : `≥ ${bound.atLeast}`;
  say(
    `${gate.padEnd(6)} ${targetMet ? "target met   " : "target missed"} ${what}: ${value} (gate ${limit}, target ${bound.target})`,
  );
}
const version = (name) =>
  JSON.parse(readFileSync(createRequire(import.meta.url).resolve(`${name}/package.json`), "utf8")).version;
const result = {
  measure: "sketch",
  kernel: activeKernel().name,
  rounds,
  seeds,
  cpuTime: "process user + system; Java: thread",
  add,
  merge,
  accuracy,
  gates,
  missed: gates.filter(({ gate }) => gate === "missed").map(({ what }) => what),
  notMeasured: [
    "RedisBloom C: its source is not to be had here",
    ...(withJava ? [] : ["Java MergingDigest: give --java"]),
  ],
  versions: {
    node: process.version,
    tdigest: version("tdigest"),
    ...(withJava ? { java: JAVA_ARTIFACT } : {}),
  },
  machine: { cpu: os.cpus()[0]?.model ?? "unknown", load: os.loadavg()[0] },
};
process.stdout.write(`${JSON.stringify(result)}\n`);
