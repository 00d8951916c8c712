import { describe, expect, test } from "vitest";
import { binomialPValue } from "../../src/rates/binomial-p-value.js";
import { garwood, poissonTail } from "../../src/rates/garwood.js";
import { rateChange } from "../../src/rates/rate-change.js";
import { rateChangePValue } from "../../src/rates/rate-change-p-value.js";
import { wilson } from "../../src/rates/wilson.js";
import { Random } from "../kit/random.js";

// Agreement with R stands in test/oracle/rates.test.ts; here are laws, edges and reduced simulations.

const counts = (events: number, trials: number) => ({ events, trials });

/** Binomial draws by counting, seeded. */
function binomial(random: Random, trials: number, share: number): number {
  let events = 0;
  for (let i = 0; i < trials; i += 1) if (random.uniform() < share) events += 1;
  return events;
}

describe("wilson(events, trials)", () => {
  test("ends exactly at 0 and 1 where nothing and everything was counted", () => {
    expect(wilson(0, 7)[0]).toBe(0);
    expect(wilson(7, 7)[1]).toBe(1);
    expect(wilson(0, 7)[1]).toBeCloseTo(1 - wilson(7, 7)[0], 14);
  });

  test("holds the shares whose score is within z: both limits satisfy |p − π| = z·√(π(1 − π)/n)", () => {
    for (const limit of wilson(13, 90)) {
      const score = Math.abs(13 / 90 - limit) / Math.sqrt((limit * (1 - limit)) / 90);
      expect(score).toBeCloseTo(1.959963984540054, 10);
    }
  });

  test.each([
    [3, 2],
    [-1, 5],
    [0, 0],
  ])("%i of %i is an INPUT error", (events, trials) => {
    expect(() => wilson(events, trials)).toThrow(`the event count is ${events} of ${trials}, outside`);
  });
});

describe("rateChange(baseline, production)", () => {
  test("is antisymmetric: sides exchanged, difference and interval change sign", () => {
    const forth = rateChange(counts(5, 200), counts(30, 500));
    const back = rateChange(counts(30, 500), counts(5, 200));
    expect(back.difference).toBe(-forth.difference);
    expect(back.interval[0]).toBeCloseTo(-forth.interval[1], 14);
    expect(back.interval[1]).toBeCloseTo(-forth.interval[0], 14);
  });

  test.each([
    ["none on both sides", counts(0, 50), counts(0, 80), 0],
    ["all on both sides", counts(50, 50), counts(80, 80), 0],
    ["the same share", counts(10, 40), counts(25, 100), 0],
    ["none, then all", counts(0, 1), counts(1, 1), 1],
    ["all, then none", counts(9, 9), counts(0, 9), -1],
  ])("%s: the difference lies in its interval, everything finite", (_, baseline, production, difference) => {
    const change = rateChange(baseline, production);
    expect(change.difference).toBe(difference);
    expect(Math.sign(change.z)).toBe(difference);
    expect(change.interval[0]).toBeLessThanOrEqual(difference);
    expect(change.interval[1]).toBeGreaterThanOrEqual(difference);
    expect(JSON.parse(JSON.stringify(change))).toEqual(change);
  });

  test("a design effect of 4 doubles the interval's width and halves z, near enough", () => {
    const plain = rateChange(counts(2000, 10_000), counts(2200, 10_000));
    const dependent = rateChange(counts(2000, 10_000), counts(2200, 10_000), { designEffect: 4 });
    const width = ({ interval }: typeof plain) => interval[1] - interval[0];
    expect(width(dependent) / width(plain)).toBeCloseTo(2, 2);
    expect(plain.z / dependent.z).toBeCloseTo(2, 10);
  });

  test("its 95 % interval covers the true difference in 93.5 to 97 % of 2,000 draws, also for rare rates", () => {
    const random = new Random(8201);
    for (const [e, g, trials] of [
      [0.01, 0.01, 400],
      [0.2, 0.25, 200],
      [0.01, 0.05, 300],
    ] as const) {
      let covered = 0;
      for (let i = 0; i < 2000; i += 1) {
        const { interval } = rateChange(
          counts(binomial(random, trials, e), trials),
          counts(binomial(random, trials, g), trials),
        );
        if (interval[0] <= g - e && g - e <= interval[1]) covered += 1;
      }
      expect(covered / 2000).toBeGreaterThan(0.935);
      expect(covered / 2000).toBeLessThanOrEqual(0.97);
    }
  });

  test("z passes 3.09 (one-sided .001) in at most .25 % of 4,000 draws without a change, at a rate of 1 %", () => {
    const random = new Random(8202);
    let passed = 0;
    for (let i = 0; i < 4000; i += 1) {
      const base = counts(binomial(random, 2000, 0.01), 2000);
      if (rateChange(base, counts(binomial(random, 200, 0.01), 200)).z > 3.0902) passed += 1;
    }
    expect(passed / 4000).toBeLessThanOrEqual(0.0025);
  });
});

describe("rateChangePValue(baseline, production)", () => {
  test("is symmetric in with and without, and 1 for the same share", () => {
    for (const [b, n, p, m] of [
      [3, 50, 9, 40],
      [300, 5000, 90, 900],
      [0, 100, 2, 7],
    ] as const) {
      const with_ = rateChangePValue(counts(b, n), counts(p, m));
      expect(rateChangePValue(counts(n - b, n), counts(m - p, m))).toBeCloseTo(with_, 12);
    }
    expect(rateChangePValue(counts(10, 40), counts(25, 100))).toBe(1);
    expect(rateChangePValue(counts(0, 9), counts(0, 3))).toBe(1);
  });

  test("few events prove little: one of one, never seen in 1,000, has p .002", () => {
    expect(rateChangePValue(counts(0, 1000), counts(1, 1))).toBeCloseTo(2 / 1001, 12);
    expect(rateChangePValue(counts(0, 1000), counts(3, 3))).toBeCloseTo(2 * (3 / 1003) ** 3, 14);
  });

  test.each([
    [0.001, 2000, 500],
    [0.02, 2000, 300],
    [0.3, 500, 60],
  ])("falls below .01 in at most 1.6 %% of 3,000 draws without a change, at a share of %f", (share, n, m) => {
    const random = new Random(8203);
    let below = 0;
    for (let i = 0; i < 3000; i += 1) {
      const [before, now] = [counts(binomial(random, n, share), n), counts(binomial(random, m, share), m)];
      if (rateChangePValue(before, now) <= 0.01) below += 1;
    }
    expect(below / 3000).toBeLessThanOrEqual(0.016);
  });
});

describe("garwood(count) and poissonTail(count, mean)", () => {
  test("garwood(0) ends at ln 40: e^(−λ) = .025", () => {
    expect(garwood(0)[0]).toBe(0);
    expect(garwood(0)[1]).toBeCloseTo(Math.log(40), 12);
  });

  test("each limit has half of α beyond the count", () => {
    const [low, high] = garwood(17, 0.9);
    expect(poissonTail(17, low)).toBeCloseTo(0.05, 12);
    expect(1 - poissonTail(18, high)).toBeCloseTo(0.05, 12);
  });

  test("poissonTail has its edges: nothing is certain, something from nothing impossible", () => {
    expect([poissonTail(0, 0), poissonTail(0, 5), poissonTail(1, 0)]).toEqual([1, 1, 0]);
    expect(() => poissonTail(-1, 2)).toThrow("a Poisson count is -1");
    expect(() => garwood(Number.NaN)).toThrow("a Poisson count is NaN");
  });
});

describe("binomialPValue(events, trials, share, alternative)", () => {
  /** By adding up the probabilities. */
  function brute(events: number, trials: number, share: number): number {
    const choose = [1];
    for (let k = 1; k <= trials; k += 1) choose.push((choose[k - 1]! * (trials - k + 1)) / k);
    const probabilities = choose.map((c, k) => c * share ** k * (1 - share) ** (trials - k));
    const limit = probabilities[events]! * (1 + 1e-7);
    return probabilities.filter((p) => p <= limit).reduce((a, b) => a + b, 0);
  }

  test("two-sided adds up everything that is no likelier, for all counts of 1, 2, 12 and 13", () => {
    for (const trials of [1, 2, 12, 13]) {
      for (const share of [0.02, 0.3, 0.5, 0.77]) {
        for (let k = 0; k <= trials; k += 1) {
          expect(binomialPValue(k, trials, share)).toBeCloseTo(Math.min(1, brute(k, trials, share)), 11);
        }
      }
    }
  });

  test("greater and less share the count itself", () => {
    const greater = binomialPValue(5, 40, 0.1, "greater");
    const less = binomialPValue(4, 40, 0.1, "less");
    expect(greater + less).toBeCloseTo(1, 13);
  });

  test.each([
    [0, 5, 0, [1, 1, 1]],
    [1, 5, 0, [0, 0, 1]],
    [5, 5, 1, [1, 1, 1]],
    [4, 5, 1, [0, 1, 0]],
  ] as const)("%i of %i against a share of %i is certain", (events, trials, share, expected) => {
    const found = (["two-sided", "greater", "less"] as const).map((alternative) =>
      binomialPValue(events, trials, share, alternative),
    );
    expect(found).toEqual(expected);
  });

  test("a share outside 0 to 1 is an INPUT error", () => {
    expect(() => binomialPValue(1, 2, 1.5)).toThrow("the share is 1.5");
  });
});
