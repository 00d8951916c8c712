import {
  adjustBenjaminiHochberg,
  adjustBenjaminiYekutieli,
  binomialPValue,
  garwood,
  poissonTail,
  rateChange,
  wilson,
} from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { R } from "./r.js";

const TOLERANCE = { relative: 1e-10, absolute: 1e-14 };

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

const COUNTS = [
  [0, 1],
  [1, 1],
  [0, 500],
  [3, 10],
  [20, 1000],
  [30, 1000],
  [682, 925],
  [12_345, 1_000_000],
] as const;

describe("wilson against prop.test of R without continuity correction", () => {
  test.each(COUNTS)("wilson(%i, %i) agrees at 95 and 99 %%", async (events, trials) => {
    for (const confidence of [0.95, 0.99]) {
      const theirs = await r.numbers(
        `prop.test(${events}, ${trials}, conf.level=${confidence}, correct=FALSE)$conf.int`,
      );
      const ours = wilson(events, trials, confidence);
      expectClose(ours[0], theirs[0]!, TOLERANCE);
      expectClose(ours[1], theirs[1]!, TOLERANCE);
    }
  });
});

describe("rateChange against Newcombe 1998, table II, method 10", () => {
  // Production against baseline; the four digits that the paper prints.
  test.each([
    { g: [56, 70], e: [48, 80], interval: ["0.0524", "0.3339"] },
    { g: [9, 10], e: [3, 10], interval: ["0.1705", "0.8090"] },
    { g: [6, 7], e: [2, 7], interval: ["0.0582", "0.8062"] },
    { g: [5, 56], e: [0, 29], interval: ["-0.0381", "0.1926"] },
    { g: [0, 10], e: [0, 20], interval: ["-0.1611", "0.2775"] },
    { g: [0, 10], e: [0, 10], interval: ["-0.2775", "0.2775"] },
    { g: [10, 10], e: [0, 20], interval: ["0.6791", "1.0000"] },
    { g: [10, 10], e: [0, 10], interval: ["0.6075", "1.0000"] },
  ])(
    "$g against $e has the interval $interval (regression value: the table from memory)",
    ({ g, e, interval }) => {
      const change = rateChange({ events: e[0]!, trials: e[1]! }, { events: g[0]!, trials: g[1]! });
      expect(change.interval.map((limit) => limit.toFixed(4))).toEqual(interval);
    },
  );

  test.each([
    [20, 1000, 3, 500],
    [0, 400, 7, 300],
    [880, 1000, 90, 100],
  ])("its formula on the limits of prop.test of R: %i of %i and %i of %i", async (e, n, g, m) => {
    const theirs = await r.numbers(
      `a <- prop.test(${g}, ${m}, correct=FALSE)$conf.int; b <- prop.test(${e}, ${n}, correct=FALSE)$conf.int; ` +
        `p <- ${g}/${m}; q <- ${e}/${n}; c(p-q-sqrt((p-a[1])^2+(b[2]-q)^2), p-q+sqrt((a[2]-p)^2+(q-b[1])^2))`,
    );
    const { interval } = rateChange({ events: e, trials: n }, { events: g, trials: m });
    expectClose(interval[0], theirs[0]!, TOLERANCE);
    expectClose(interval[1], theirs[1]!, TOLERANCE);
  });
});

describe("binomialPValue against binom.test of R", () => {
  test.each([
    [20, 1000, 0.01],
    [30, 1000, 0.01],
    [0, 500, 0.01],
    [500, 500, 0.99],
    [682, 925, 0.75],
    [3, 10, 0.5],
    [5, 10, 0.5],
    [1, 7, 0.3],
    [10_200, 1_000_000, 0.01],
  ])("%i of %i against %f agrees, two-sided, greater and less", async (events, trials, share) => {
    for (const [ours, theirs] of [
      ["two-sided", "two.sided"],
      ["greater", "greater"],
      ["less", "less"],
    ] as const) {
      const p = await r.number(`binom.test(${events}, ${trials}, ${share}, alternative="${theirs}")$p.value`);
      expectClose(binomialPValue(events, trials, share, ours), p, { relative: 1e-9, absolute: 1e-14 });
    }
  });
});

describe("garwood and poissonTail against poisson.test and ppois of R", () => {
  test.each([0, 1, 7, 20, 1000, 3_000_000])("garwood(%i) agrees at 95 and 99.9 %%", async (count) => {
    for (const confidence of [0.95, 0.999]) {
      const theirs = await r.numbers(`poisson.test(${count}, conf.level=${confidence})$conf.int`);
      const ours = garwood(count, confidence);
      expectClose(ours[0], theirs[0]!, TOLERANCE);
      expectClose(ours[1], theirs[1]!, TOLERANCE);
    }
  });

  test.each([
    [1, 0.01],
    [5, 5],
    [70, 52.4],
    [200, 52.4],
    [1_000_500, 1_000_000],
  ])("poissonTail(%i, %f) agrees", async (count, mean) => {
    const theirs = await r.number(`ppois(${count - 1}, ${mean}, lower.tail=FALSE)`);
    expectClose(poissonTail(count, mean), theirs, { relative: 1e-9, absolute: 0 });
  });
});

describe("adjusted p-values against p.adjust of R", () => {
  const VECTORS = [
    "c(.001,.008,.039,.041,.042,.06,.074,.205,.212,.216)",
    "c(.5,.5,.5)",
    "c(0,1,.02,.02,.0001)",
    "{set.seed(8302); runif(300)^3}",
  ];
  test.each(VECTORS)("BH and BY agree on %s", async (vector) => {
    const values = await r.numbers(vector);
    for (const [method, adjust] of [
      ["BH", adjustBenjaminiHochberg],
      ["BY", adjustBenjaminiYekutieli],
    ] as const) {
      await r.assign("p", values);
      const theirs = await r.numbers(`p.adjust(p, "${method}")`);
      for (const [i, adjusted] of adjust(values).entries()) {
        expectClose(adjusted, theirs[i]!, { relative: 1e-14, absolute: 1e-300 });
      }
    }
  });
});
