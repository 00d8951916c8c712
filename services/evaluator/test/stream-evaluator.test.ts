import { streamRule } from "@moorline/baseline";
import { NumericSketch } from "@moorline/sketch";
import { criticalZ } from "@moorline/stats";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { BASELINE_ID, EvaluatedStore, MINUTE, START, TRAINING } from "./evaluated-store.js";

/** 500 values like the training; with `tail`, a tenth of them far above all of it. */
const like = (seed: number, tail = false): number[] =>
  Array.from({ length: 500 }, (_, i) =>
    tail && i % 10 === 0 ? 5_000 + i : TRAINING[(i * 2 + seed) % 1_000]!,
  );

let at: EvaluatedStore;

beforeEach(async () => {
  at = await EvaluatedStore.open();
});

afterEach(async () => {
  expect((await at.store.audit()).findings).toEqual([]);
  await at.close();
});

async function minutes(
  from: number,
  to: number,
  values: (minute: number) => readonly number[],
): Promise<void> {
  for (let minute = from; minute < to; minute++) {
    at.nowMs = START + minute * MINUTE;
    await at.events(minute, values(minute));
  }
}

async function stateOf(slice = "all", horizon = "5m") {
  const states = await at.store.evaluations.states("s");
  return states.find((row) => row.slice === slice && row.horizon === horizon);
}

describe("StreamEvaluator", () => {
  it("rolls panes, hours and windows up to exactly what was counted, and decides each window in order", async () => {
    await at.setBaseline();
    await minutes(0, 67, (minute) => like(minute));
    await at.settle(at.evaluator());
    const panes = await at.store.panes.rollups({
      stream: "s",
      level: "pane",
      fromMs: 0,
      toMs: Number.MAX_SAFE_INTEGER,
      slice: "all",
    });
    expect(panes.map((row) => (row.startMs - START) / MINUTE)).toEqual(
      Array.from({ length: 65 }, (_, i) => i),
    );
    const [hour] = await at.store.panes.rollups({
      stream: "s",
      level: "hour",
      fromMs: START,
      toMs: START + 1,
      slice: "all",
    });
    const all = Array.from({ length: 60 }, (_, minute) => like(minute)).flat();
    const sketch = NumericSketch.decode(hour!.body);
    expect(sketch.counts).toMatchObject({ events: 30_000, finite: 30_000 });
    expect(sketch.sum).toBe(all.reduce((sum, value) => sum + value, 0));
    const { counts, values } = sketch.thresholdCounts()!;
    expect(counts).toEqual(values.map((threshold) => all.filter((value) => value <= threshold).length));
    const evaluations = await at.store.evaluations.evaluations({
      stream: "s",
      fromMs: 0,
      toMs: Number.MAX_SAFE_INTEGER,
      slice: "all",
    });
    const ends = (horizon: string) =>
      evaluations.filter((row) => row.horizon === horizon).map((row) => (row.windowEndMs - START) / MINUTE);
    expect(ends("5m")).toEqual([5, 10, 15, 20, 25, 30, 35, 40, 45, 50, 55, 60, 65]);
    expect(ends("1h")).toEqual([60]);
    expect(evaluations.find((row) => row.horizon === "1h")).toMatchObject({
      events: 30_000,
      state: "holding",
    });
    expect(new Set(evaluations.map((row) => row.state))).toEqual(new Set(["holding"]));
  });

  it("a heavier tail is adrift after three windows or at once, and the logbook says from what, since when and by how much", async () => {
    await at.setBaseline();
    await minutes(0, 12, (minute) => like(minute));
    await minutes(12, 32, (minute) => like(minute, minute >= 15));
    await at.settle(at.evaluator());
    expect(await stateOf()).toMatchObject({
      state: "adrift",
      sinceMs: START + 20 * MINUTE,
      baselineId: BASELINE_ID,
    });
    const entries = await at.store.logbook.entries({ kind: "state-change", limit: 50 });
    const entry = entries.find(
      (one) => one.subject === "f" && one.sentence.startsWith("f (all, 5m) is adrift"),
    );
    expect(entry?.detail).toMatchObject({
      from: "holding",
      to: "adrift",
      windowEndMs: START + 20 * MINUTE,
      n: { production: 2_500 },
    });
    expect(entry?.sentence).toContain("upper tail heavier");
    // Why it paged, in numbers: what was seen, how strong it is, and what was needed for this stream's number of windows.
    const rule = streamRule(at.config.streams[0]!, 2);
    expect(entry?.detail).toMatchObject({
      why: {
        // The test's baseline has no blocks.
        tolerance: { basis: "assumed", seasonal: false },
        needed: { adrift: rule.zPage, straining: rule.zPage - 1 },
        evidence: { designEffect: 1, baselineItself: 0 },
      },
      rule: { zPage: rule.zPage, persistence: 3 },
      place: { part: "upper tail" },
    });
    const { evidence } = (
      entry!.detail as { why: { evidence: { z: number; observed: number; expected: number } } }
    ).why;
    expect(Math.abs(evidence.z)).toBeGreaterThanOrEqual(rule.zPage);
    expect(entry?.sentence).toContain("its events were taken as independent");
  });

  it("asks for more evidence the more windows a stream decides", () => {
    const stream = at.config.streams[0]!;
    const [few, many] = [streamRule(stream, 1), streamRule(stream, 400)];
    // One feature, 8,640 + 720 windows a month; 512 times as many.
    expect(few.zPage).toBeCloseTo(criticalZ(9_360), 12);
    expect(many.zPage).toBeCloseTo(criticalZ(512 * 9_360), 12);
    expect(streamRule(stream, 300).zPage).toBe(many.zPage);
    const tried = { persistence: 5, releaseAfter: 2, bodyFloor: 0.1, tailFactor: 3 };
    expect(streamRule(stream, 1, tried)).toMatchObject(tried);
  });

  it("amends late panes without a change of state, in hours and evaluations too", async () => {
    await at.setBaseline();
    await minutes(0, 64, (minute) => like(minute));
    const evaluator = at.evaluator();
    await at.settle(evaluator);
    const before = await at.store.evaluations.states("s");
    await at.events(3, like(3, true));
    await at.events(3, [7]);
    await at.settle(evaluator);
    expect(await at.store.evaluations.states("s")).toEqual(before);
    const pane = { stream: "s", fromMs: START, toMs: START + 5 * MINUTE, slice: "all" } as const;
    const amended = (await at.store.panes.rollups({ ...pane, level: "pane" })).filter((row) => row.amended);
    expect(amended).toMatchObject([{ startMs: START + 3 * MINUTE, events: 1_001 }]);
    expect(await at.store.panes.rollups({ ...pane, level: "hour" })).toMatchObject([
      { events: 30_501, amended: true },
    ]);
    const window = { stream: "s", horizon: "5m", slice: "all", fromMs: START, toMs: START + 10 * MINUTE };
    const evaluations = await at.store.evaluations.evaluations(window);
    expect(evaluations.map((row) => [row.amended, row.events, row.state])).toEqual([
      [true, 3_001, "holding"],
      [false, 2_500, "holding"],
    ]);
    expect(await at.store.logbook.entries({ kind: "pane-amended", limit: 9 })).toHaveLength(1);
  });

  it("goes on after a restart where the last one stopped, with the decision's memory", async () => {
    await at.setBaseline();
    await minutes(0, 12, (minute) => like(minute));
    await at.settle(at.evaluator("first"));
    const progress = await at.store.evaluations.progress("s");
    await minutes(12, 24, (minute) => like(minute));
    at.nowMs += 60_000;
    await at.settle(at.evaluator("second"));
    expect((await at.store.evaluations.progress("s"))!.closedThroughMs).toBeGreaterThan(
      progress!.closedThroughMs,
    );
    expect(await stateOf()).toMatchObject({ state: "holding", sinceMs: START + 5 * MINUTE });
  });

  it("leaves the stream to the leader until its lease ends, and what the old one still has in hand is refused", async () => {
    await at.setBaseline();
    await minutes(0, 12, (minute) => like(minute));
    const [leader, waiting] = [at.evaluator("leader"), at.evaluator("waiting")];
    await leader.tick();
    for (let minute = 12; minute < 24; minute++) await at.events(minute, like(minute));
    await waiting.tick();
    expect((await at.store.evaluations.progress("s"))!.closedThroughMs).toBe(START + 10 * MINUTE);
    await leader.release();
    await at.settle(waiting);
    expect((await at.store.evaluations.progress("s"))!.closedThroughMs).toBe(START + 22 * MINUTE);
    expect(await at.telemetry.registry.metrics()).toContain('moorline_feature_state{stream="s",feature="f"');
    await leader.tick();
    expect((await at.store.evaluations.progress("s"))!.closedThroughMs).toBe(START + 22 * MINUTE);
    expect(await at.telemetry.registry.metrics()).not.toContain(
      'moorline_feature_state{stream="s",feature="f"',
    );
  });

  it("says thin, with the reason, while no baseline is active; a new baseline starts the decision anew", async () => {
    await minutes(0, 12, (minute) => like(minute));
    const evaluator = at.evaluator();
    await at.settle(evaluator);
    expect(await stateOf()).toMatchObject({
      state: "thin",
      sentence: "no baseline is active",
      baselineId: null,
    });
    await at.setBaseline();
    await minutes(12, 40, (minute) => like(minute, minute >= 15));
    await at.settle(evaluator);
    expect(await stateOf()).toMatchObject({ state: "adrift", baselineId: BASELINE_ID });
    await at.setBaseline("c".repeat(64));
    await minutes(40, 58, (minute) => like(minute));
    await at.settle(evaluator);
    expect(await stateOf()).toMatchObject({ state: "holding", baselineId: "c".repeat(64) });
  });

  it("holds a slice without a part of its own against the whole, and says so; a slice that appears later is evaluated from then on", async () => {
    await at.setBaseline();
    await minutes(0, 7, (minute) => like(minute));
    const evaluator = at.evaluator();
    await at.settle(evaluator);
    expect(await stateOf("depot=south")).toBeUndefined();
    for (let minute = 7; minute < 18; minute++) {
      at.nowMs = START + minute * MINUTE;
      await at.events(minute, like(minute), "south");
    }
    await at.settle(evaluator);
    expect(await stateOf("depot=south")).toMatchObject({ state: "holding" });
    expect(await stateOf("depot=north")).toMatchObject({ state: "thin" });
    const [row] = await at.store.evaluations.evaluations({
      stream: "s",
      slice: "depot=south",
      fromMs: 0,
      toMs: START + 10 * MINUTE,
    });
    expect(row?.comparison).toMatchObject({ baselineSlice: "all" });
  });

  it("is silent when no event comes, and resumes; metrics carry the state", async () => {
    await at.setBaseline();
    await minutes(0, 12, (minute) => like(minute));
    const evaluator = at.evaluator();
    await at.settle(evaluator);
    const metric = 'moorline_feature_state{stream="s",feature="f",slice="all",horizon="5m",state="silent"}';
    expect(await at.telemetry.registry.metrics()).toContain(`${metric} 0`);
    at.nowMs += 11 * MINUTE;
    await at.settle(evaluator);
    expect(await stateOf()).toMatchObject({ state: "silent" });
    expect(await at.telemetry.registry.metrics()).toContain(`${metric} 1`);
    await at.events(40, like(40));
    at.nowMs += MINUTE;
    await at.settle(evaluator);
    await minutes(41, 53, (minute) => like(minute));
    await at.settle(evaluator);
    expect(await stateOf()).toMatchObject({ state: "holding" });
    const kinds = (await at.store.logbook.entries({ stream: "s", limit: 50 })).map((entry) => entry.kind);
    expect(kinds.filter((kind) => kind.startsWith("stream-"))).toEqual(["stream-resumed", "stream-silent"]);
  });

  it("gives the hour and the day before a long silence their rollups", async () => {
    await at.setBaseline();
    await minutes(0, 20, (minute) => like(minute));
    const evaluator = at.evaluator();
    await at.settle(evaluator);
    const later = 5 * 24 * 60;
    await minutes(later, later + 8, (minute) => like(minute));
    await at.settle(evaluator);
    const range = { stream: "s", fromMs: START - 86_400_000, toMs: START + 1, slice: "all" } as const;
    expect(await at.store.panes.rollups({ ...range, level: "hour" })).toMatchObject([
      { startMs: START, events: 10_000 },
    ]);
    expect(await at.store.panes.rollups({ ...range, level: "day" })).toMatchObject([{ events: 10_000 }]);
    expect((await at.store.evaluations.progress("s"))!.closedThroughMs).toBe(START + (later + 6) * MINUTE);
  });
});
