import type { StreamConfig } from "@moorline/config";
import type { FeatureStateRow, PartitionRow, PendingPane } from "@moorline/store";
import { describe, expect, it } from "vitest";
import { ClaimsSeen } from "../src/claims-seen.js";
import { dueWindows } from "../src/due-windows.js";
import { type PanePlanInput, panePlan } from "../src/pane-plan.js";
import { silenceChange } from "../src/silence.js";
import { stateChange } from "../src/state-book.js";
import { watermark } from "../src/watermark.js";

const MINUTE = 60_000;
const HOUR = 60 * MINUTE;
const DAY = 24 * HOUR;

const partition = (changes: Partial<PartitionRow>): PartitionRow => ({
  stream: "s",
  topic: "t",
  partition: 0,
  owner: "a",
  epoch: 1,
  startOffset: 0,
  nextOffset: 10,
  status: "reading",
  sourceId: "x",
  maxEventMs: 100 * MINUTE,
  lastEventAtMs: 0,
  updatedAtMs: 0,
  events: 10,
  lateEvents: 0,
  deadLetters: 0,
  ...changes,
});

describe("watermark", () => {
  const of = (partitions: readonly PartitionRow[], settling: readonly PartitionRow[] = []) =>
    watermark({
      partitions,
      settling: new Set(settling),
      latenessMs: 2 * MINUTE,
      idleAfterMs: 5 * MINUTE,
      nowMs: 0,
    });
  const active = (watermarkMs: number | null) => ({ watermarkMs, nothingActive: false });
  const inactive = (watermarkMs: number | null) => ({ watermarkMs, nothingActive: true });

  it("is the slowest active partition, less the lateness", () => {
    expect(of([partition({}), partition({ partition: 1, maxEventMs: 90 * MINUTE })])).toEqual(
      active(88 * MINUTE),
    );
  });

  it.each([
    ["idle", { lastEventAtMs: -6 * MINUTE }],
    ["finished", { status: "finished" }],
    ["halted", { status: "log-rewound" }],
    ["without an event so far", { maxEventMs: null, lastEventAtMs: null }],
  ] as const)("is not held back by a partition that is %s", (_, changes) => {
    expect(of([partition({}), partition({ partition: 1, maxEventMs: 5 * MINUTE, ...changes })])).toEqual(
      active(98 * MINUTE),
    );
  });

  it("passes the last event when no partition is active, and is null before the first event", () => {
    expect(of([partition({ status: "finished" })])).toEqual(inactive(100 * MINUTE + 1));
    expect(of([])).toEqual(inactive(null));
    expect(of([partition({ maxEventMs: null, lastEventAtMs: null })])).toEqual(inactive(null));
  });

  it("waits for the backlog of a partition that changed hands a moment ago, unless it is finished", () => {
    const idle = partition({ partition: 1, maxEventMs: 5 * MINUTE, lastEventAtMs: -HOUR });
    expect(of([partition({}), idle], [idle])).toEqual(active(3 * MINUTE));
    const empty = partition({ partition: 1, maxEventMs: null, lastEventAtMs: null });
    expect(of([partition({}), empty], [empty])).toEqual(active(null));
    const finished = partition({ partition: 1, maxEventMs: 5 * MINUTE, status: "finished" });
    expect(of([partition({}), finished], [finished])).toEqual(active(98 * MINUTE));
  });
});

describe("ClaimsSeen", () => {
  it("counts from when this process first saw the claim, anew for each owner epoch", () => {
    const claims = new ClaimsSeen();
    const settling = (row: PartitionRow, nowMs: number) => claims.settling([row], nowMs, 100).size;
    const first = partition({});
    expect([settling(first, 0), settling(first, 99), settling(first, 100)]).toEqual([1, 1, 0]);
    const second = partition({ epoch: 2 });
    expect([settling(second, 150), settling(second, 249), settling(second, 250)]).toEqual([1, 1, 0]);
  });
});

describe("panePlan", () => {
  const pane = (minute: number, rolledUp = false): PendingPane => ({
    paneStartMs: minute * MINUTE,
    segments: 1,
    rolledUp,
  });
  const plan = (changes: Partial<PanePlanInput>) => {
    const { closing, late, more } = panePlan({
      pending: [],
      closedThroughMs: null,
      watermarkMs: 0,
      paneMs: MINUTE,
      longestHorizonMs: HOUR,
      nothingActive: false,
      mostPanes: 60,
      ...changes,
    });
    return { closing: closing.map((ms) => ms / MINUTE), late: late.map((ms) => ms / MINUTE), more };
  };

  it("closes every pane that ends by the watermark, empty ones too, from the first that has events", () => {
    const pending = [pane(10), pane(12), pane(13)];
    expect(plan({ pending, watermarkMs: 13 * MINUTE + 59_000 })).toEqual({
      closing: [10, 11, 12],
      late: [],
      more: false,
    });
  });

  it("tells late panes from panes to close", () => {
    const pending = [pane(3, true), pane(5), pane(9)];
    expect(plan({ pending, closedThroughMs: 8 * MINUTE, watermarkMs: 10 * MINUTE })).toEqual({
      closing: [8, 9],
      late: [3, 5],
      more: false,
    });
  });

  it("closes the pane of the last event when nothing is active, and no more than that", () => {
    const input = { pending: [pane(10)], watermarkMs: 10 * MINUTE + 1, nothingActive: true };
    expect(plan(input).closing).toEqual([10]);
    expect(plan({ ...input, pending: [], closedThroughMs: 11 * MINUTE }).closing).toEqual([]);
  });

  it("takes a bounded number at once and says that there is more", () => {
    const input = { pending: [pane(0), pane(99)], watermarkMs: 100 * MINUTE, mostPanes: 40 };
    expect(plan(input)).toMatchObject({ closing: { length: 40 }, more: true });
    expect(plan({ ...input, closedThroughMs: 80 * MINUTE })).toMatchObject({
      closing: { length: 20 },
      more: false,
    });
  });

  it("does not walk through a long silence, but ends the day that it began in", () => {
    const pending = [pane((9 * DAY) / MINUTE)];
    const input = { pending, watermarkMs: 9 * DAY + MINUTE, mostPanes: 10_000 };
    const toDayEnd = plan({ ...input, closedThroughMs: 2 * DAY - 3 * MINUTE });
    expect(toDayEnd).toEqual({ closing: [2_877, 2_878, 2_879], late: [], more: true });
    const onward = plan({ ...input, closedThroughMs: 2 * DAY });
    expect(onward.closing[0]).toBe((9 * DAY - HOUR) / MINUTE);
    expect(onward.closing.at(-1)).toBe((9 * DAY) / MINUTE);
    expect(onward.more).toBe(false);
  });

  it("has nothing to do before the first event", () => {
    expect(plan({ watermarkMs: 100 * MINUTE })).toEqual({ closing: [], late: [], more: false });
  });
});

describe("dueWindows", () => {
  const horizons = [
    { label: "5m", ms: 5 * MINUTE },
    { label: "1h", ms: HOUR },
    { label: "24h", ms: DAY },
  ];

  it.each([
    [3 * MINUTE, []],
    [5 * MINUTE, ["5m"]],
    [2 * HOUR, ["5m", "1h"]],
    [DAY, ["5m", "1h", "24h"]],
  ])("at %d ends the windows %j", (endMs, labels) => {
    const due = dueWindows(endMs, horizons);
    expect(due.map((window) => window.horizon)).toEqual(labels);
    for (const window of due) expect(window.endMs).toBe(endMs);
  });
});

describe("stateChange", () => {
  const row = (state: FeatureStateRow["state"]): FeatureStateRow => ({
    stream: "s",
    horizon: "5m",
    slice: "all",
    feature: "f",
    state,
    sinceMs: 5,
    windowEndMs: 5,
    baselineId: "b",
    memory: null,
    sentence: "why",
  });

  it.each([
    [undefined, "holding", null],
    [undefined, "thin", null],
    [undefined, "adrift", { from: null, to: "adrift" }],
    ["holding", "holding", null],
    ["holding", "straining", { from: "holding", to: "straining" }],
    ["adrift", "holding", { from: "adrift", to: "holding" }],
  ] as const)("from %s to %s", (before, after, detail) => {
    const entry = stateChange(before === undefined ? undefined : row(before), row(after), 9, { n: 3 });
    if (detail === null) expect(entry).toBeNull();
    else {
      expect(entry).toMatchObject({
        kind: "state-change",
        subject: "f",
        detail: { ...detail, n: 3, windowEndMs: 5 },
      });
      expect(entry!.sentence).toBe(`f (all, 5m) is ${after}: why`);
    }
  });
});

describe("silenceChange", () => {
  const stream = {
    name: "s",
    silentAfterMs: 10 * MINUTE,
    horizons: [{ label: "5m", ms: 5 * MINUTE }],
    features: [{ name: "f" }, { name: "g" }],
  } as unknown as StreamConfig;
  const at = (nowMs: number, partitions: readonly PartitionRow[], states: readonly FeatureStateRow[] = []) =>
    silenceChange({ stream, partitions, startedMs: 0, nowMs, states, slices: ["all"] });

  it("makes every feature silent once no event came for too long, and says it once", () => {
    const quiet = [partition({ lastEventAtMs: MINUTE })];
    expect(at(11 * MINUTE, quiet)).toBeNull();
    const change = at(12 * MINUTE, quiet)!;
    expect(change.states.map((row) => [row.feature, row.state])).toEqual([
      ["f", "silent"],
      ["g", "silent"],
    ]);
    expect(change.logbook).toMatchObject([{ kind: "stream-silent" }]);
    expect(at(30 * MINUTE, quiet, change.states)).toBeNull();
  });

  it("measures a feed that never spoke from the start, and leaves a finished one alone", () => {
    expect(at(11 * MINUTE, [])?.logbook).toHaveLength(1);
    expect(at(HOUR, [partition({ status: "finished" })])).toBeNull();
  });

  it("says once that events come again", () => {
    const silent = at(12 * MINUTE, [partition({})])!.states;
    const back = [partition({ lastEventAtMs: 20 * MINUTE })];
    const resumed = at(21 * MINUTE, back, silent)!;
    expect(resumed.logbook).toMatchObject([{ kind: "stream-resumed", detail: { stillAdrift: 0 } }]);
    expect(resumed.states.map((row) => row.state)).toEqual(["thin", "thin"]);
    expect(at(22 * MINUTE, back, resumed.states)).toBeNull();
  });

  it("a feature that was adrift before the silence still is after it, since the same time", () => {
    const adrift = (feature: string, memory: object) =>
      ({ stream: "s", horizon: "5m", slice: "all", feature, state: "adrift", sinceMs: 5, memory }) as never;
    const before = [adrift("f", { state: "adrift", sinceMs: 5 }), adrift("g", { state: "holding" })];
    const silent = at(12 * MINUTE, [partition({})], before)!.states;
    const back = [partition({ lastEventAtMs: 20 * MINUTE })];
    const resumed = at(21 * MINUTE, back, silent)!;
    expect(resumed.states.map((row) => [row.state, row.sinceMs])).toEqual([
      ["adrift", 5],
      ["thin", 21 * MINUTE],
    ]);
    expect(resumed.logbook).toMatchObject([{ detail: { stillAdrift: 1 } }]);
  });

  it("takes up a slice that came in the silence without another entry, and a restart does not end the silence", () => {
    const quiet = [partition({ lastEventAtMs: MINUTE })];
    const silent = at(12 * MINUTE, quiet)!.states;
    const more = silenceChange({
      stream,
      partitions: quiet,
      startedMs: 0,
      nowMs: 13 * MINUTE,
      states: silent,
      slices: ["all", "north"],
    })!;
    expect(more.states).toHaveLength(4);
    expect(more.logbook).toEqual([]);
    const restarted = { stream, partitions: quiet, startedMs: HOUR, states: silent, slices: ["all"] };
    expect(silenceChange({ ...restarted, nowMs: HOUR + MINUTE })).toBeNull();
  });
});
