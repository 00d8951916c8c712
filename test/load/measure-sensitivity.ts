// Whether what the sensitivity table says comes true: node --import tsx test/load/measure-sensitivity.ts (after a build)
//   [--runs 400] [--seed 20261203]
// For several window sizes, each change of the table at its size, through the code that judges windows in production.
// Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { sensitivityOf } from "@moorline/stats";
import { changeOfSize } from "./decision/changes.js";
import { normalSetting, pagesWithin } from "./decision/power-run.js";
import { RULE_OF_A_TEAM } from "./decision/setting.js";

const { values: options } = parseArgs({
  options: { runs: { type: "string", default: "400" }, seed: { type: "string", default: "20261203" } },
});
const runs = Number(options.runs);
const seed = Number(options.seed);
const STATED = 0.9;
const BASELINE_BLOCKS = 1_000;
/** Longer times are scales of the same rule; they take too long here. */
const LONGEST_WINDOWS = 24;

const rows: object[] = [];
for (const eventsPerWindow of [100, 200, 1_000, 5_000]) {
  const setting = normalSetting(BASELINE_BLOCKS, eventsPerWindow, seed + eventsPerWindow);
  for (const { change, visible } of sensitivityOf({ ...setting, eventsPerWindow, power: STATED })) {
    if (change === "missing more often") continue;
    for (const { windows, size } of visible) {
      if (windows > LONGEST_WINDOWS) continue;
      let paged = 0;
      for (let run = 0; run < runs; run += 1) {
        const own = seed + 7_919 * run + windows;
        const made = changeOfSize(change, size, setting.quantile, own + 1);
        if (pagesWithin(setting, made, windows, eventsPerWindow, own)) paged += 1;
      }
      const row = { eventsPerWindow, change, windows, size, stated: STATED, power: paged / runs };
      console.error(JSON.stringify(row));
      rows.push(row);
    }
  }
}
const least = Math.min(...rows.map((row) => (row as { power: number }).power));
console.log(
  JSON.stringify({
    measure: "sensitivity",
    baseline: `${BASELINE_BLOCKS} blocks of independent normal values`,
    zPage: RULE_OF_A_TEAM.zPage,
    runs,
    seed,
    leastPower: least,
    rows,
    node: process.version,
  }),
);
