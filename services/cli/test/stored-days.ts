import { NumericSketch } from "@moorline/sketch";
import { openStore, type RollupRow } from "@moorline/store";
import { SeededRandom } from "../src/demo/random.js";
import { moorline, type TestFolder } from "./capture-io.js";

const MINUTE = 60_000;
export const STORED_FROM = Date.UTC(2026, 0, 5);
/** Minutes of production; from this one on the upper tail of x is heavier, for three hours. */
export const STORED_MINUTES = 1_440;
export const DRIFT_FROM = 720;
export const DRIFT_MINUTES = 180;
const EVENTS_A_MINUTE = 40;

const CONFIG = `store: sqlite:./s.db
streams:
  - name: s
    source: { file: { paths: [f.ndjson] } }
    payload: { eventTime: at }
    slices: [depot]
    features: [ { name: x, unit: °C }, { name: y } ]
    horizons: [5m, 1h]
`;

/** A store with a baseline of three days and a day of panes, in slices `all` and `depot=north`; gives `--config FILE`. */
export async function storedDays(folder: TestFolder): Promise<string[]> {
  const config = ["--config", folder.write("moorline.yaml", CONFIG)];
  const rows = Array.from({ length: 3 * 1_440 * 10 }, (_, i) => {
    const at = new Date(Date.UTC(2026, 0, 1) + i * 6_000).toISOString();
    return `${at},${normalOf(1, i)},${normalOf(2, i)}`;
  });
  const training = folder.write("train.csv", `at,x,y\n${rows.join("\n")}\n`);
  const set = await moorline(["baseline", "set", "--from", training, "--activate", ...config]);
  if (set.err !== "") throw new Error(set.err);
  const store = await openStore({ kind: "sqlite", path: folder.at("s.db") });
  const lease = await store.evaluations.acquireLease("test", "me", STORED_FROM, MINUTE);
  const closedThroughMs = STORED_FROM + STORED_MINUTES * MINUTE;
  await store.evaluations.commit({
    stream: "s",
    lease: lease!,
    progress: { watermarkMs: closedThroughMs, closedThroughMs, evaluatedAtMs: closedThroughMs },
    rollups: Array.from({ length: STORED_MINUTES }, (_, minute) => rowsOf(minute)).flat(),
    settledSegments: [],
    evaluations: [],
    states: [],
    logbook: [],
  });
  await store.close();
  return config;
}

function rowsOf(minute: number): RollupRow[] {
  const isDrifting = minute >= DRIFT_FROM && minute < DRIFT_FROM + DRIFT_MINUTES;
  return ["all", "depot=north"].flatMap((slice) =>
    ["x", "y"].map((feature, f): RollupRow => {
      const sketch = new NumericSketch();
      for (let i = 0; i < EVENTS_A_MINUTE; i += 1) {
        const value = normalOf(10 + f, minute * EVENTS_A_MINUTE + i);
        const isMoved = isDrifting && feature === "x" && i % 10 === 0;
        sketch.add(isMoved ? value + 4 : value);
      }
      const startMs = STORED_FROM + minute * MINUTE;
      return {
        level: "pane",
        startMs,
        slice,
        feature,
        events: EVENTS_A_MINUTE,
        amended: false,
        body: sketch.encode(),
      };
    }),
  );
}

function normalOf(seed: number, index: number): number {
  const random = new SeededRandom(seed, index);
  return Math.sqrt(-2 * Math.log(random.uniform())) * Math.cos(2 * Math.PI * random.uniform());
}
