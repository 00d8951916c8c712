// How often the decision strains or goes adrift when nothing changed, and how many windows it takes when something did:
// node packages/stats/bench/measure-decision.mjs [windows] (after a build). Independent normal values, baseline of 50,000.
// Talks on stderr; the last line of stdout is one JSON object.
import { compareNumeric, decide, numericSideOf } from "../dist/index.js";

const WINDOWS = Number(process.argv[2] ?? 4000);
const REPEATS = 40;
const LONGEST = 200;
const SEED = 20260114;
const uniform = generator(SEED);
const baseline = numericSideOf(Array.from({ length: 50_000 }, normal));

const CHANGES = {
  "mean + 0.2 sd": (x) => x + 0.2,
  "scale x 1.3": (x) => 1.3 * x,
  "twice the values above p99": (x) => (x > 2.0537 && x <= 2.3263 ? x + 0.3 : x),
  "1 % of rows at + 10 sd": (x) => (uniform() < 0.01 ? x + 10 : x),
};

const rows = [200, 1000, 5000].map((m) => {
  const quiet = runWindows(m, (x) => x, Math.round((WINDOWS * 1000) / Math.max(m, 500)));
  const delays = Object.fromEntries(
    Object.entries(CHANGES).map(([name, change]) => [name, delaysOf(m, change)]),
  );
  const row = { eventsPerWindow: m, ...quiet, windowsToAdrift: delays };
  console.error(JSON.stringify(row));
  return row;
});
console.log(JSON.stringify({ seed: SEED, node: process.version, baseline: 50_000, repeats: REPEATS, rows }));

function runWindows(m, change, windows) {
  let memory = null;
  let straining = 0;
  let adrift = 0;
  for (let i = 0; i < windows; i += 1) {
    const before = memory?.state;
    const decision = decide(memory, compareNumeric(baseline, windowOf(m, change)));
    memory = decision.memory;
    if (decision.state === "straining") straining += 1;
    if (decision.state === "adrift" && before !== "adrift") adrift += 1;
  }
  return { windows, strainingShare: straining / windows, adriftIncidents: adrift };
}

function delaysOf(m, change) {
  const delays = Array.from({ length: REPEATS }, () => {
    let memory = null;
    for (let i = 1; i <= LONGEST; i += 1) {
      const decision = decide(memory, compareNumeric(baseline, windowOf(m, change)));
      memory = decision.memory;
      if (decision.state === "adrift") return i;
    }
    return null;
  });
  const found = delays.filter((d) => d !== null).sort((a, b) => a - b);
  return {
    found: found.length / REPEATS,
    median: found[found.length >> 1] ?? null,
    p90: found[Math.floor(found.length * 0.9)] ?? null,
  };
}

function windowOf(m, change) {
  return numericSideOf(Array.from({ length: m }, () => change(normal())));
}

function normal() {
  return Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}

/** mulberry32. */
function generator(seed) {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  };
}
