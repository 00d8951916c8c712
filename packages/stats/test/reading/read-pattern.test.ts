import { describe, expect, test } from "vitest";
import { type NumericSide, numericSideOf } from "../../src/numeric-side.js";
import { readPattern } from "../../src/reading/read-pattern.js";
import { Random } from "../kit/random.js";

const random = new Random(901);
const BASELINE_VALUES = random.sample(20_000, (r) => 20 + 5 * r.normal());
const BASELINE = numericSideOf(BASELINE_VALUES);
const fresh = (change: (x: number, i: number) => number | null = (x) => x, m = 4_000) =>
  numericSideOf(random.sample(m, (r) => 20 + 5 * r.normal()).map(change));
const read = (production: NumericSide, unit: string | null = "°C") =>
  readPattern(BASELINE, production, { unit });

describe("readPattern(baseline, production, options)", () => {
  test("readPattern of the same distribution says that the pairs lie on the line", () => {
    expect(read(fresh())).toEqual({
      kind: "none",
      sentence:
        "the pairs lie on the reference line, as near as chance allows; a move of less than about 0.5094 °C would not show; n = 4,000 against 20,000",
      runnerUp: null,
      figures: {},
    });
  });

  test("readPattern of a move names its size with an interval that holds the truth", () => {
    const { kind, sentence, figures } = read(fresh((x) => x + 3));
    expect(kind).toBe("location");
    expect(figures["shift"]).toBeCloseTo(3, 0);
    const [, by, low, high] =
      /everything moved up by about ([\d.]+) °C \(([\d.]+) °C to ([\d.]+) °C\); n = 4,000/.exec(sentence)!;
    expect(Number(low)).toBeLessThan(3);
    expect(Number(high)).toBeGreaterThan(3);
    expect(Number(by)).toBeGreaterThan(Number(low));
    expect(read(fresh((x) => x - 3)).sentence).toMatch(/^everything moved down by about [23]\.\d* °C \([23]/);
  });

  test.each([
    {
      name: "a wider spread",
      change: (x: number) => 20 + 1.5 * (x - 20),
      kind: "scale",
      says: /^values spread about 1\.(4[5-9]|5|5[0-5]) times as wide about the same middle/,
    },
    {
      name: "a narrower spread",
      change: (x: number) => 20 + 0.6 * (x - 20),
      kind: "scale",
      says: /^values spread only about 0\.\d+ times as wide/,
    },
    {
      name: "both",
      change: (x: number) => 24 + 1.5 * (x - 20),
      kind: "location and scale",
      says: /^everything moved up by .*, and values spread about 1\.(4[5-9]|5|5[0-5]) times as wide/,
    },
    {
      name: "an upper tail",
      change: (x: number) => (x > 26.4 ? 26.4 + 2.2 * (x - 26.4) : x),
      kind: "upper tail",
      says: /^only the upper tail left the line: .* above .* °C, where .* were to be expected \([\d.]+ times; [\d.]+ times to [\d.]+ times\), beyond p9/,
    },
    {
      name: "a lower tail",
      change: (x: number) => (x < 13.6 ? 13.6 + 2.2 * (x - 13.6) : x),
      kind: "lower tail",
      says: /^only the lower tail left the line/,
    },
    {
      name: "a clipped sensor",
      change: (x: number) => Math.min(x, 28),
      kind: "clipped",
      says: /^values are clipped at 28 °C: [\d.]+ % \([\d.]+ % to [\d.]+ %\) are exactly that and none lies above it, where the baseline has [\d.]+ %/,
    },
    {
      name: "Fahrenheit",
      change: (x: number) => 1.8 * x + 32,
      kind: "unit change",
      says: /^looks like another unit: values are 1\.8 times the baseline's plus 32, as when degrees Celsius become degrees Fahrenheit;/,
    },
    {
      name: "thousandths",
      change: (x: number) => 1_000 * x,
      kind: "unit change",
      says: /^looks like another unit: values are 1,000 times the baseline's, as when kilograms become grams;/,
    },
    {
      name: "tens",
      change: (x: number) => x / 10,
      kind: "unit change",
      says: /values are the baseline's divided by 10, as when millimetres become centimetres;/,
    },
    { name: "a turned sign", change: (x: number) => -x, kind: "sign flip", says: /^the sign is turned/ },
    {
      name: "a filled-in zero",
      change: (x: number, i: number) => (i % 12 === 0 ? 0 : x),
      kind: "default-fill",
      says: /^8\.[34] % of values \(7\.\d % to 9\.\d %\) are exactly 0 °C, as a filled-in default would be; the baseline has 0 %/,
    },
    {
      name: "rounding",
      change: (x: number) => 2 * Math.round(x / 2),
      kind: "rounding",
      says: /^values are rounded: \d+ of them make up (99\.\d|100\.0) %, 2 °C apart/,
    },
    {
      name: "a small group far out",
      change: (x: number, i: number) => (i % 50 === 0 ? 75 + (i % 7) / 5 : x),
      kind: "contamination",
      says: /^a small group by itself: about 2\.0 % of values \(1\.\d % to 2\.\d %\) lie far above, around 7\d\.?\d* °C/,
    },
    {
      name: "a second population",
      change: (x: number, i: number) => (i % 5 === 0 ? x + 20 : x),
      kind: "mixture",
      says: /^a second population: (about|at least) (1[6-9]|20|21)\.\d % of values lie above the rest, around (39|40|41)/,
    },
    {
      name: "a gap",
      change: (x: number) => (x > 18 && x < 21.5 ? x + 4 : x),
      kind: "gap",
      says: /^values from 1[78]\.?\d* °C to 21\.?\d* °C are gone/,
    },
  ])("readPattern names $name", ({ change, kind, says }) => {
    const reading = read(fresh(change));
    expect(reading.kind).toBe(kind);
    expect(reading.sentence).toMatch(says);
    expect(reading.sentence).toMatch(/; n = 4,000 against 20,000$/);
  });

  test("readPattern names a value that is gone", () => {
    const baseline = numericSideOf(BASELINE_VALUES.map((x, i) => (i % 10 === 0 ? 0 : x)));
    const reading = readPattern(baseline, fresh());
    expect(reading.kind).toBe("vanished atom");
    expect(reading.sentence).toMatch(/^the value 0 is gone: 10\.0 % of the baseline are exactly that/);
  });

  test("readPattern names the runner-up where there is one", () => {
    const reading = read(fresh((x) => 1.8 * x + 32));
    expect(reading.runnerUp).toBe("location and scale");
    expect(reading.sentence).toContain("; it may also be a move with a change of spread; n = ");
  });

  test("readPattern takes dependence off: what is plain for independent events may be chance for others", () => {
    const moved = fresh((x) => x + 1);
    expect(readPattern(BASELINE, moved).kind).toBe("location");
    expect(readPattern(BASELINE, moved, { designEffect: 30 }).kind).toBe("none");
  });

  const some = (values: readonly (number | null)[]) => numericSideOf(values);
  const ones = some(Array.from({ length: 500 }, () => 1));
  test.each([
    { name: "no value on either side", baseline: some([]), production: some([]), kind: "thin" },
    { name: "one value", baseline: BASELINE, production: some([3]), kind: "thin" },
    { name: "two values", baseline: BASELINE, production: some([3, 90]), kind: "thin" },
    { name: "one baseline value", baseline: some([3]), production: fresh(), kind: "thin" },
    {
      name: "every value missing",
      baseline: BASELINE,
      production: some(Array.from({ length: 400 }, () => null)),
      kind: "all missing",
    },
    {
      name: "three events, all missing",
      baseline: BASELINE,
      production: some([null, null, null]),
      kind: "thin",
    },
    { name: "one and the same constant", baseline: ones, production: ones, kind: "cannot tell" },
    {
      name: "a constant that varies now",
      baseline: ones,
      production: some(Array.from({ length: 500 }, (_, i) => i)),
      kind: "vanished atom",
    },
    {
      name: "a feature that is constant now",
      baseline: BASELINE,
      production: some(Array.from({ length: 500 }, () => 20)),
      kind: "default-fill",
    },
    {
      name: "a constant that is another one",
      baseline: ones,
      production: some(Array.from({ length: 500 }, () => 2)),
      kind: "default-fill",
    },
    {
      name: "values near the greatest double",
      baseline: BASELINE,
      production: fresh((x, i) => (i % 2 === 0 ? 1e308 : -1e308) * Math.abs(Math.sin(x))),
      kind: "cannot tell",
    },
    {
      name: "no quarter to measure a spread by",
      baseline: some(Array.from({ length: 1_000 }, (_, i) => (i < 900 ? 0 : i))),
      production: some(Array.from({ length: 1_000 }, (_, i) => (i < 900 ? 0 : i))),
      kind: "none",
    },
  ])("readPattern of $name is $kind, in finite numbers", ({ baseline, production, kind }) => {
    const reading = readPattern(baseline, production);
    expect(reading.kind).toBe(kind);
    expect(JSON.parse(JSON.stringify(reading))).toEqual(reading);
    expect(reading.sentence).not.toMatch(/NaN|Infinity|undefined/);
  });

  test.each([
    { name: "a million million", center: 1e149, sd: 1e-10 },
    { name: "the smallest doubles", center: 0, sd: 1e-300 },
    { name: "neither sum nor product", center: 1e140, sd: 1e139 },
  ])("readPattern of values beyond $name has finite figures", ({ center, sd }) => {
    const drawn = (m: number, far: number) =>
      numericSideOf(random.sample(m, (r) => center + sd * r.normal() + (r.uniform() < 0.2 ? far : 0)));
    for (const far of [0, 1e149, -1e140, 1e20]) {
      const reading = readPattern(drawn(2_000, 0), drawn(1_000, far));
      expect(JSON.parse(JSON.stringify(reading))).toEqual(reading);
      expect(reading.sentence).not.toMatch(/NaN|Infinity|undefined/);
    }
  });
});
