import { createJsonDecoder } from "@moorline/decode";
import { NumericSketch } from "@moorline/sketch";
import { decodeSegmentBody } from "@moorline/store";
import { describe, expect, it } from "vitest";
import { parcelStream } from "../../../test/fixtures/stream-config.js";
import { SegmentAccumulator } from "../src/segment-accumulator.js";
import { SliceRegistry } from "../src/slice-registry.js";
import { parcel } from "./collected.js";

const noOptions = { optionsFor: () => ({}) };
const stream = parcelStream();
const decoder = createJsonDecoder(stream);

function accumulator(): SegmentAccumulator {
  return new SegmentAccumulator(stream, new SliceRegistry(["depot"], 50, [], () => {}), noOptions);
}

function add(to: SegmentAccumulator, line: string): void {
  const result = decoder.decode(Buffer.from(line), null);
  if (!result.ok) throw new Error(result.detail);
  to.add(result.event);
}

function sketchOf(body: Uint8Array, feature: string): NumericSketch {
  return NumericSketch.decode(decodeSegmentBody(body).get(feature)!);
}

describe("SegmentAccumulator", () => {
  it("take() gives one segment a pane and slice, oldest pane first, and is empty afterwards", () => {
    const held = accumulator();
    for (const second of [125, 0, 59, 60, 61]) add(held, parcel(second));
    const baseMs = Date.UTC(2026, 11, 1, 9);

    expect(held.take().map((s) => [s.paneStartMs - baseMs, s.slice, s.events])).toEqual([
      [0, "all", 2],
      [0, "depot=north", 1],
      [0, "depot=south", 1],
      [60_000, "all", 2],
      [60_000, "depot=north", 1],
      [60_000, "depot=south", 1],
      [120_000, "all", 1],
      [120_000, "depot=south", 1],
    ]);
    expect(held.take()).toEqual([]);
    expect(held.heldBytes).toBe(0);
  });

  it("add() keeps every value and every absence over many flushes (10,000 events, one in seven lacks a feature)", () => {
    const held = accumulator();
    let sum = 0;
    let absent = 0;
    for (let i = 0; i < 10_000; i++) {
      const lacks = i % 7 === 3;
      const temp = (i * 7919) % 1000;
      add(held, parcel(i % 60, lacks ? { cargo: null } : { cargo: { temp } }));
      if (lacks) absent++;
      else sum += temp;
    }
    const all = held.take().find((segment) => segment.slice === "all")!;

    expect(all.events).toBe(10_000);
    const sketch = sketchOf(all.body, "cargo_temp");
    expect(sketch.counts).toMatchObject({ events: 10_000, finite: 10_000 - absent, missing: absent });
    expect(sketch.sum).toBe(sum);
    expect(sketchOf(all.body, "door_openings").counts).toMatchObject({ finite: 10_000, missing: 0 });
  });

  it.each([1, 7, 8, 9, 19])("add() puts each value under its own feature (%i features)", (count) => {
    const features = Array.from({ length: count }, (_, f) => ({
      name: `f${f}`,
      kind: "numeric" as const,
      path: [`f${f}`],
      unit: null,
    }));
    const wide = parcelStream({ features, slices: [] });
    const wideDecoder = createJsonDecoder(wide);
    const held = new SegmentAccumulator(wide, new SliceRegistry([], 50, [], () => {}), noOptions);
    for (let i = 0; i < 100; i++) {
      const values = Object.fromEntries(features.map(({ name }, f) => [name, 1000 * f + i]));
      const result = wideDecoder.decode(Buffer.from(parcel(0, values)), null);
      if (result.ok) held.add(result.event);
    }
    const [all] = held.take();
    const ranges = features.map(({ name }) => {
      const sketch = sketchOf(all!.body, name);
      return [sketch.min, sketch.max, sketch.counts.finite];
    });
    expect(ranges).toEqual(features.map((_, f) => [1000 * f, 1000 * f + 99, 100]));
  });

  it("the same events make the same bytes, so that a replay after a crash writes what was lost", () => {
    const bodies = [accumulator(), accumulator()].map((held) => {
      for (let i = 0; i < 6000; i++) add(held, parcel(i % 60, { cargo: { temp: (i * 31) % 977 } }));
      return held.take().map((segment) => Buffer.from(segment.body).toString("hex"));
    });
    expect(bodies[0]).toEqual(bodies[1]);
  });

  it("heldBytes grows with what is held and never falls below it", () => {
    const held = accumulator();
    add(held, parcel(0));
    const first = held.heldBytes;
    for (let i = 0; i < 3000; i++) add(held, parcel(i % 60));

    expect(first).toBeGreaterThan(0);
    expect(held.heldBytes).toBeGreaterThan(first + 1500 * 2 * 8);
  });
});
