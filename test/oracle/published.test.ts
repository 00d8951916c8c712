import {
  cdfOf,
  clopperPearson,
  kolmogorovTail,
  ksDistance,
  ksPValueAsymptotic,
  ksPValueExact,
  wasserstein1,
} from "@moorline/stats";
import { describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";

// Values from print, each with its source. Where the figures or the data stand here from memory or from a second program rather
// than from a page that was opened, the title says "regression value": such a row guards against change, it proves no agreement.

/** Samples of n and m values without ties; the exact law depends on the sizes alone. */
function untied(n: number, m: number) {
  return [
    cdfOf(Array.from({ length: n }, (_, i) => i)),
    cdfOf(Array.from({ length: m }, (_, i) => i + 0.5)),
  ] as const;
}

describe("the two-sample table of Massey 1951 (Annals of Mathematical Statistics 22, 125–128) and 1952 (23, 435–441)", () => {
  // n = m; the smallest c for which D ≥ c/n rejects at .05 and at .01.
  const rows = [
    { n: 8, five: 6, one: 7, standing: "agrees with a printed table: 48/64, 56/64" },
    { n: 10, five: 7, one: 8, standing: "agrees with a printed table: 70/100, 80/100" },
    { n: 12, five: 7, one: 8, standing: "agrees with a printed table: 84/144, 96/144" },
    { n: 15, five: 8, one: 9, standing: "regression value" },
    { n: 20, five: 9, one: 11, standing: "regression value" },
    { n: 30, five: 11, one: 13, standing: "regression value" },
    { n: 40, five: 13, one: 15, standing: "regression value" },
  ];

  test.each(rows)(
    "ksPValueExact rejects from $five/$n at .05 and from $one/$n at .01 ($standing)",
    ({ n, five, one }) => {
      const [a, b] = untied(n, n);
      const p = (c: number) => ksPValueExact(c / n, a, b);
      expect(p(five)).toBeLessThanOrEqual(0.05);
      expect(p(five - 1)).toBeGreaterThan(0.05);
      expect(p(one)).toBeLessThanOrEqual(0.01);
      expect(p(one - 1)).toBeGreaterThan(0.01);
    },
  );

  test.each([2, 5, 8, 13, 20, 30, 40])(
    "ksPValueExact equals the closed form for n = m = %i (Gnedenko and Korolyuk 1951), in whole-number arithmetic",
    (n) => {
      const [a, b] = untied(n, n);
      for (let k = 1; k <= n; k += 1) {
        let numerator = 0n;
        for (let j = 1; j * k <= n; j += 1) numerator += (j % 2 === 1 ? 2n : -2n) * choose(2 * n, n - j * k);
        const exact = ratio(numerator, choose(2 * n, n));
        expectClose(ksPValueExact(k / n, a, b), exact, { relative: 1e-12, absolute: 0 });
      }
    },
  );
});

describe("the limit law of Smirnov 1948 (doi:10.1214/aoms/1177730256)", () => {
  test.each([
    [0.2, 1.07274917],
    [0.1, 1.22384787],
    [0.05, 1.35809864],
    [0.025, 1.48020686],
    [0.01, 1.62762361],
    [0.005, 1.73081838],
    [0.001, 1.9494746],
  ])(
    "kolmogorovTail is %d at %d (every printed table has these to two decimals; the further digits are regression values)",
    (alpha, critical) => {
      expectClose(kolmogorovTail(critical), alpha, { relative: 3e-8, absolute: 0 });
    },
  );

  test.each([
    [1.22, 0.1],
    [1.36, 0.05],
    [1.48, 0.025],
    [1.63, 0.01],
    [1.73, 0.005],
    [1.95, 0.001],
  ])("kolmogorovTail(%d) is %d to the two decimals of the printed critical value", (critical, alpha) => {
    expect(kolmogorovTail(critical - 0.005)).toBeGreaterThan(alpha);
    expect(kolmogorovTail(critical + 0.005)).toBeLessThan(alpha);
  });

  test.each([
    [0.5, 0.0360547563],
    [0.8, 0.4558575884],
    [1, 0.7300003283],
    [1.36, 0.9505141232],
    [1.63, 0.9901536351],
  ])(
    "1 − kolmogorovTail(%d) is %d, ten decimals (regression value; 1.36 and 1.63 are the tables' .95 and .99)",
    (x, k) => {
      expectClose(1 - kolmogorovTail(x), k, { relative: 0, absolute: 6e-11 });
    },
  );

  test("kolmogorovTail's two series meet at their seam", () => {
    expectClose(kolmogorovTail(1.18 - 1e-12), kolmogorovTail(1.18 + 1e-12), { relative: 1e-10, absolute: 0 });
  });
});

describe("worked examples of the two-sample test", () => {
  test("ksPValueExact: D = .3 of 10 against 10 has p = .7869297884777761 (documentation of the Rust crate rv, ks_two_sample)", () => {
    const [a, b] = untied(10, 10);
    expectClose(ksPValueExact(0.3, a, b), 0.7869297884777761, { relative: 1e-13, absolute: 0 });
  });

  test("Conover, Practical Nonparametric Statistics, 9 against 15 values: D = .4, p = .2652749055 (data from memory: regression value)", () => {
    const x = cdfOf([7.6, 8.4, 8.6, 8.7, 9.3, 9.9, 10.1, 10.6, 11.2]);
    const y = cdfOf([5.2, 5.7, 5.9, 6.5, 6.8, 8.2, 9.1, 9.8, 10.8, 11.3, 11.5, 12.3, 12.5, 13.4, 14.6]);
    expect(ksDistance(x, y).distance).toBeCloseTo(0.4, 14);
    expectClose(ksPValueExact(0.4, x, y), 0.2652749055, { relative: 3e-10, absolute: 0 });
  });

  test("ties 1,2,2,3,3 and 1,2,3,3,4,5: D = 1/3, p = .7402597403 = 57/77 (regression value, counted by hand as a fraction)", () => {
    const x = cdfOf([1, 2, 2, 3, 3]);
    const y = cdfOf([1, 2, 3, 3, 4, 5]);
    expect(ksDistance(x, y).distance).toBeCloseTo(1 / 3, 14);
    expectClose(ksPValueExact(1 / 3, x, y), 57 / 77, { relative: 1e-12, absolute: 0 });
  });

  test("ozone rats of Doksum & Sievers 1976 (doi:10.1093/biomet/63.3.421): D, both p and W1 (data from memory: regression values)", () => {
    const control = cdfOf([
      41, 38.4, 24.4, 25.9, 21.9, 18.3, 13.1, 27.3, 28.5, -16.9, 26, 17.4, 21.8, 15.4, 27.4, 19.2, 22.4, 17.7,
      26, 29.4, 21.4, 26.6, 22.7,
    ]);
    const ozone = cdfOf([
      10.1, 6.1, 20.4, 7.3, 14.3, 15.5, -9.9, 6.8, 28.2, 17.9, -9, -12.9, 14, 6.6, 12.1, 15.7, 39.9, -15.9,
      54.6, -14.7, 44.1, -9,
    ]);
    const { distance, direction } = ksDistance(control, ozone);
    expectClose(distance, 0.5968379447, { relative: 1e-10, absolute: 0 });
    expect(direction).toBe("above");
    expectClose(ksPValueExact(distance, control, ozone), 0.0003717538025, { relative: 1e-9, absolute: 0 });
    expectClose(ksPValueAsymptotic(distance, 23, 22), 0.0006636575076, { relative: 1e-9, absolute: 0 });
    expectClose(wasserstein1(control, ozone), 14.2960474308, { relative: 1e-11, absolute: 0 });
  });
});

describe("worked examples of the Clopper–Pearson interval", () => {
  test("682 of 925 peas, the example of Conover 1971 that R's help on binom.test takes up (limits: regression values)", () => {
    const [low, high] = clopperPearson(682, 925);
    expect([low.toFixed(7), high.toFixed(7)]).toEqual(["0.7076683", "0.7654066"]);
  });

  test.each([
    { events: 81, trials: 263, low: "0.2527", high: "0.3676" },
    { events: 0, trials: 20, low: "0.0000", high: "0.1684" },
    { events: 1, trials: 29, low: "0.0009", high: "0.1776" },
  ])(
    "$events of $trials, table I of Newcombe 1998 (doi:10.1002/(SICI)1097-0258(19980430)17:8<857::AID-SIM777>3.0.CO;2-E; from memory: regression value)",
    ({ events, trials, low, high }) => {
      expect(clopperPearson(events, trials).map((end) => end.toFixed(4))).toEqual([low, high]);
    },
  );
});

function choose(n: number, k: number): bigint {
  let product = 1n;
  for (let i = 1; i <= k; i += 1) product = (product * BigInt(n - k + i)) / BigInt(i);
  return product;
}

/** A quotient of whole numbers to 17 digits, however small. */
function ratio(numerator: bigint, denominator: bigint): number {
  const scale = 10n ** 60n;
  return Number((numerator * scale) / denominator) / 1e60;
}
