import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { ComparedCategories } from "../../src/categorical/categorical-comparison.js";
import { categoricalVerdict } from "../../src/categorical/categorical-verdict.js";
import { type CategoryCounts, categoryCountsOf } from "../../src/categorical/category-counts.js";
import { categoryInWords } from "../../src/categorical/category-in-words.js";
import { compareCategories } from "../../src/categorical/compare-categories.js";
import { unseenEvents } from "../../src/categorical/unseen-events.js";
import { poissonTail } from "../../src/rates/garwood.js";
import { Random } from "../kit/random.js";
import { PROPERTY } from "../kit/samples.js";

type Counts = Readonly<Record<string, number>>;

function side(counts: Counts, missing = 0, other = 0): CategoryCounts {
  const map = new Map(Object.entries(counts));
  const values = [...map.values()].reduce((a, b) => a + b, other);
  return { events: values + missing, missing, counts: map, other };
}

function compared(
  baseline: CategoryCounts,
  production: CategoryCounts,
  designEffect = 1,
): ComparedCategories {
  const comparison = compareCategories(baseline, production, { designEffect });
  if (comparison.thin) throw new Error(comparison.reason);
  return comparison;
}

const verdict = (baseline: CategoryCounts, production: CategoryCounts) =>
  categoricalVerdict(compareCategories(baseline, production));

const BASE = side({ north: 6000, south: 3000, east: 900, west: 100 }, 100);

describe("compareCategories(baseline, production)", () => {
  test("of any two sides goes through JSON unchanged, with a verdict", () => {
    const value = fc.option(
      fc.oneof(fc.constantFrom("a", "b", "__proto__", ""), fc.string({ unit: "binary" })),
      {
        nil: null,
      },
    );
    const values = fc.array(value, { maxLength: 60 });
    fc.assert(
      fc.property(values, values, fc.nat(3), fc.constantFrom(1, 7.5), (a, b, other, designEffect) => {
        const counted = categoryCountsOf(a);
        const baseline = { ...counted, other, events: counted.events + other };
        const comparison = compareCategories(baseline, categoryCountsOf(b), { designEffect });
        const judged = categoricalVerdict(comparison);
        expect(JSON.parse(JSON.stringify({ comparison, judged }))).toEqual({ comparison, judged });
        expect(judged.sentence).not.toMatch(/NaN|Infinity|undefined|null/);
      }),
      PROPERTY,
    );
  });

  test("identical sides: nothing moved, holding", () => {
    const comparison = compared(BASE, BASE);
    expect(comparison).toMatchObject({ psi: 0, jensenShannon: 0, new: [], vanished: [], bins: 4 });
    expect(comparison.g).toMatchObject({ df: 3, pValue: 1 });
    expect(
      comparison.movers.every(
        ({ difference, z, adjustedP }) => difference === 0 && z === 0 && adjustedP === 1,
      ),
    ).toBe(true);
    expect(categoricalVerdict(comparison)).toEqual({
      state: "holding",
      place: null,
      sentence: "every category within tolerance; n = 10,000 against 10,000 in the baseline",
    });
  });

  test.each([
    ["an empty baseline", side({}), BASE, "the baseline has no value"],
    ["an empty production", BASE, side({}), "production has no value"],
    ["both empty", side({}), side({}), "the baseline has no value"],
    [
      "a production of missing values only, against one",
      side({}, 5),
      side({}, 5),
      "the baseline has no value",
    ],
  ])("%s → thin, with the reason and null in place of every statistic", (_, baseline, production, reason) => {
    const comparison = compareCategories(baseline, production);
    expect(comparison).toMatchObject({
      thin: true,
      reason,
      g: null,
      psi: null,
      totalVariation: null,
      movers: [],
    });
    expect(categoricalVerdict(comparison)).toMatchObject({
      state: "thin",
      sentence: `too few values to tell: ${reason}`,
    });
  });

  test.each([1, 2, 49])("%i values on a side → thin, unless what they show is plain", (count) => {
    expect(verdict(side({ a: count }), side({ a: 1000 })).state).toBe("thin");
    expect(verdict(side({ a: 1000 }), side({ a: count })).state).toBe("thin");
    expect(verdict(side({ a: 1000 }), side({ b: count })).state).toBe(count === 49 ? "adrift" : "thin");
  });

  test.each([
    ["a count that is not whole", side({ a: 1.5 })],
    ["a negative count", side({ a: -1, b: 2 })],
    ["events that do not add up", { ...side({ a: 3 }), events: 7 }],
    ["a count that is no number", side({ a: Number.NaN })],
  ])("%s is an INPUT error", (_, broken) => {
    expect(() => compareCategories(broken, BASE)).toThrow(
      "the sum of missing values, kept categories and other",
    );
    expect(() => compareCategories(BASE, broken)).toThrow(
      "the sum of missing values, kept categories and other",
    );
  });

  test("a design effect makes everything less certain and changes no distance", () => {
    const moved = side({ north: 5700, south: 3200, east: 1000, west: 100 });
    const plain = compared(BASE, moved);
    const dependent = compared(BASE, moved, 5);
    expect(dependent.totalVariation.distance).toBe(plain.totalVariation.distance);
    expect(dependent.g.pValue).toBeGreaterThan(plain.g.pValue);
    expect(dependent.psiNoise.expected).toBeCloseTo(5 * plain.psiNoise.expected, 12);
    expect(Math.abs(dependent.movers[0]!.z)).toBeLessThan(Math.abs(plain.movers[0]!.z));
  });

  test("counts of 10⁹ give finite figures", () => {
    const huge = (shift: number) => side({ a: 6e8 + shift, b: 4e8 - shift });
    expect(compared(huge(0), huge(0)).g.pValue).toBe(1);
    const moved = compared(huge(0), huge(1e8));
    expect(Math.abs(moved.movers[0]!.difference)).toBeCloseTo(0.1, 12);
    expect(categoricalVerdict(moved).state).toBe("adrift");
  });

  test("new categories are shown from 0.1 % and 5 events on; the rest is unseen events", () => {
    const counts = { north: 5989, south: 3000, east: 900, west: 100 };
    expect(compared(BASE, side({ ...counts, upper: 11 })).new.map(({ category }) => category)).toEqual([
      "upper",
    ]);
    expect(compared(BASE, side({ ...counts, upper: 9 })).new).toEqual([]);
    expect(compared(BASE, side({ a: 90, upper: 4 })).new.map(({ category }) => category)).toEqual(["a"]);
    const found = compared(BASE, side({ ...counts, upper: 11 }));
    expect(found.new[0]).toMatchObject({ count: 11, share: 11 / 10_000 });
    expect(found.unseen).toMatchObject({ events: 11, expected: 0 });
  });

  test("a vanished category has P(0) = (1 − p)^m, and is shown when chance does not leave it out", () => {
    const { vanished } = compared(BASE, side({ north: 600, south: 300, east: 90 }));
    expect(vanished).toHaveLength(1);
    expect(vanished[0]).toMatchObject({ category: "west", baselineShare: 0.01, expected: 9.9 });
    expect(vanished[0]!.zeroProbability).toBeCloseTo(0.99 ** 990, 12);
    expect(vanished[0]!.pValue).toBeGreaterThan(vanished[0]!.zeroProbability);
    expect(compared(BASE, side({ north: 60, south: 30, east: 9 })).vanished).toEqual([]);
    expect(compared(BASE, side({ north: 600, south: 300, east: 90 }, 0, 3)).vanished).toEqual([]);
    expect(compared(BASE, side({ north: 600, south: 300, east: 90, west: 0 }, 0, 30)).vanished).toHaveLength(
      1,
    );
  });

  test("where the baseline has other, nothing is called new and unseen events are not told", () => {
    const baseline = side({ north: 6000, south: 3000 }, 0, 1000);
    const comparison = compared(baseline, side({ north: 600, south: 300, upper: 100 }));
    expect(comparison).toMatchObject({ new: [], unseen: null });
    expect(categoricalVerdict(comparison).state).toBe("holding");
  });

  test("the sum over categories of a side is its n, whatever the names", () => {
    const names = ["__proto__", "constructor", "", "a\u0000\n", "x".repeat(10_000)];
    const values = names.flatMap((name, i) => Array<string>(10 * (i + 1)).fill(name));
    const comparison = compared(categoryCountsOf(values), categoryCountsOf(values.toReversed()));
    expect(comparison.categories).toEqual({ baseline: 5, production: 5 });
    expect(comparison.movers.map(({ category }) => category).toSorted()).toEqual(names.toSorted());
    expect(comparison.g.statistic).toBeLessThan(1e-12);
  });
});

describe("categoricalVerdict(comparison)", () => {
  const rows = [
    {
      name: "a share that rose by more than the floor",
      production: side({ north: 5300, south: 3600, east: 1000, west: 100 }, 100),
      state: "adrift",
      sentence: 'less of category "north": 53.0 % of values, the baseline has 60.0 %; n = 10,000',
    },
    {
      name: "a share that rose clearly, but by less than the floor",
      production: side({ north: 5700, south: 3300, east: 900, west: 100 }, 100),
      state: "straining",
      sentence: 'less of category "north": 57.0 % of values, the baseline has 60.0 %; n = 10,000',
    },
    {
      name: "a new category above 1 %",
      production: side({ north: 5900, south: 2900, east: 900, west: 100, upper: 200 }, 100),
      state: "adrift",
      sentence: 'new category "upper": 2.0 % of values, none in the baseline\'s 10,000; n = 10,000',
    },
    {
      name: "a new category below 1 %",
      production: side({ north: 5990, south: 2970, east: 900, west: 100, upper: 40 }, 100),
      state: "straining",
      sentence: 'new category "upper": 0.4 % of values, none in the baseline\'s 10,000; n = 10,000',
    },
    {
      name: "a category that is gone",
      production: side({ north: 6060, south: 3040, east: 900 }, 100),
      state: "adrift",
      sentence: 'category "west" is gone: no value has it, 1.0 % of the baseline\'s had; n = 10,000',
    },
    {
      name: "more missing values",
      production: side({ north: 6000, south: 3000, east: 900, west: 100 }, 400),
      state: "adrift",
      sentence: "more missing values: 3.8 % of events carry no value, the baseline has 0.99 %; n = 10,400",
    },
  ] as const;
  test.each(rows)("$name → $state", ({ production, state, sentence }) => {
    const judged = verdict(BASE, production);
    expect([judged.state, judged.sentence]).toEqual([state, sentence]);
  });

  test("values missing altogether are adrift, though no category can be compared", () => {
    expect(verdict(BASE, side({}, 200))).toMatchObject({
      state: "adrift",
      place: { part: "missing", category: null },
      sentence: "more missing values: 100.0 % of events carry no value, the baseline has 0.99 %; n = 200",
    });
  });

  test("values of categories that are not kept, where there were none → adrift", () => {
    const judged = verdict(BASE, side({ north: 4800, south: 2400, east: 720, west: 80 }, 0, 2000));
    expect(judged.state).toBe("adrift");
    expect(verdict(side({ north: 6000 }, 0, 4000), side({ north: 600 }, 0, 400)).state).toBe("holding");
  });

  test("many small shifts that no category shows by itself → adrift as a whole", () => {
    const counts = (shift: number) =>
      side(
        Object.fromEntries(Array.from({ length: 40 }, (_, i) => [`c${i}`, 500 + (i % 2 ? shift : -shift)])),
      );
    const judged = verdict(counts(0), counts(90));
    expect(judged.state).toBe("adrift");
    expect(judged.place).toMatchObject({ part: "categories", category: null });
    expect(judged.sentence).toMatch(
      /^categories shared out differently: 9\.0 % of values lie in other categories than in the baseline, chance alone makes \d\.\d+ %; n = 20,000$/,
    );
  });

  test("a thousand new categories, each too rare to be shown → adrift by unseen values", () => {
    const many = Object.fromEntries(Array.from({ length: 1000 }, (_, i) => [`id-${i}`, 2]));
    const judged = verdict(BASE, side({ north: 6000, south: 3000, east: 900, west: 100, ...many }));
    expect(judged.state).toBe("adrift");
    const unseen = verdict(side({ a: 100_000 }), side({ a: 98_000, ...many }));
    expect(unseen).toMatchObject({
      state: "adrift",
      place: { part: "unseen" },
      sentence: "values that the baseline never had: 2.0 % of them, 0 % were to be expected; n = 100,000",
    });
  });

  test("holds in at least 97 % of 300 draws without a change, with 5, 60 and 2,000 Zipf categories", () => {
    const random = new Random(8602);
    for (const kinds of [5, 60, 2000]) {
      const draw = zipf(kinds, random);
      const baseline = categoryCountsOf(Array.from({ length: 5000 }, draw));
      let quiet = 0;
      let adrift = 0;
      for (let i = 0; i < 300; i += 1) {
        const { state } = verdict(baseline, categoryCountsOf(Array.from({ length: 500 }, draw)));
        if (state === "holding") quiet += 1;
        if (state === "adrift") adrift += 1;
      }
      expect(quiet / 300).toBeGreaterThanOrEqual(0.97);
      expect(adrift).toBeLessThanOrEqual(1);
    }
  });
});

function zipf(kinds: number, random: Random): () => string {
  const cumulative: number[] = [];
  let sum = 0;
  for (let k = 1; k <= kinds; k += 1) {
    sum += k ** -1.1;
    cumulative.push(sum);
  }
  return () => {
    const u = random.uniform() * sum;
    let low = 0;
    let high = kinds - 1;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (cumulative[middle]! < u) low = middle + 1;
      else high = middle;
    }
    return `k${low}`;
  };
}

describe("unseenEvents(input)", () => {
  test("tends to the Poisson tail above m·N₁/n when the baseline is far larger", () => {
    for (const unseen of [3, 10, 25]) {
      const { pValue, expected } = unseenEvents({
        n: 1e9,
        singletons: 1e7,
        m: 1000,
        unseen: Array<number>(unseen).fill(1),
      });
      expect(expected).toBeCloseTo(10, 12);
      expect(pValue / poissonTail(unseen, 10)).toBeCloseTo(1, 2);
    }
  });

  test("nothing unseen → p 1; one among as many as the baseline has proves nothing", () => {
    expect(unseenEvents({ n: 10, singletons: 4, m: 10, unseen: [] }).pValue).toBe(1);
    expect(unseenEvents({ n: 10, singletons: 0, m: 10, unseen: [1] }).pValue).toBeCloseTo(0.5, 14);
  });

  test("events of one category are one surprise, of ten categories ten", () => {
    const of = (unseen: readonly number[]) => unseenEvents({ n: 1000, singletons: 2, m: 1000, unseen });
    expect(of([10])).toMatchObject({ events: 10, expected: 2 });
    expect(of([10]).pValue).toBeGreaterThan(0.3);
    expect(of(Array<number>(10).fill(1)).pValue).toBeLessThan(0.05);
    expect(() => of([1001])).toThrow("the event count is 1001 of 1000");
  });
});

describe("categoryInWords(category)", () => {
  test.each([
    ["north", '"north"'],
    ["", '""'],
    ['say "hi" \\', '"say \\"hi\\" \\\\"'],
    ["a\u0000\u001b[31m\n", '"a\\u{0}\\u{1b}[31m\\u{a}"'],
    ["\u202eevil", '"\\u{202e}evil"'],
    ["\ud800", '"\\u{d800}"'],
    ["x".repeat(10_000), `"${"x".repeat(40)}…"`],
    ["😀".repeat(41), `"${"😀".repeat(40)}…"`],
  ])("%j is %s", (category, words) => {
    expect(categoryInWords(category)).toBe(words);
  });
});
