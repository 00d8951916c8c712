import {
  betaQuantile,
  clopperPearson,
  incompleteBeta,
  shareRange,
  signedRootDeviance,
} from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { R } from "./r.js";

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

describe("clopperPearson against binom.test of R", () => {
  test.each([
    [0, 1],
    [1, 1],
    [0, 500],
    [500, 500],
    [1, 29],
    [15, 148],
    [20, 1000],
    [30, 1000],
    [682, 925],
    [1, 100_000],
    [1234, 100_000],
    [50_000, 100_000],
    [10_431, 1_000_000],
    [999_000, 1_000_000],
  ])("clopperPearson(%i, %i) agrees at 95, 99 and 99.9 %%", async (events, trials) => {
    for (const confidence of [0.95, 0.99, 0.999]) {
      const theirs = await r.numbers(`binom.test(${events}, ${trials}, conf.level=${confidence})$conf.int`);
      const ours = clopperPearson(events, trials, confidence);
      expectClose(ours[0], theirs[0]!, { relative: 1e-10, absolute: 1e-14 });
      expectClose(ours[1], theirs[1]!, { relative: 1e-10, absolute: 1e-14 });
    }
  });
});

describe("incompleteBeta and betaQuantile against pbeta and qbeta of R", () => {
  const shapes = [
    [0.5, 0.5],
    [0.37, 812.4],
    [1, 1],
    [2.5, 7],
    [20, 981],
    [3.2, 1e5],
    [5e3, 5e3],
    [12_345.6, 987_654.3],
    [4e6, 6e6],
  ] as const;

  test.each(shapes)("incompleteBeta(x, %d, %d) agrees from far below to far above the mean", async (a, b) => {
    const mean = a / (a + b);
    const sd = Math.sqrt((mean * (1 - mean)) / (a + b + 1));
    const xs = [-6, -3, -1, -0.1, 0, 0.1, 1, 3, 6].map((k) => mean + k * sd).filter((x) => x > 0 && x < 1);
    const theirs = await r.numbers(`pbeta(c(${xs.join(",")}), ${a}, ${b})`);
    // With shapes of millions, one rounding of x alone moves the far tail by about 1e-9 of itself.
    const relative = Math.max(1e-11, 1e-15 * (a + b));
    for (const [i, x] of xs.entries())
      expectClose(incompleteBeta(x, a, b), theirs[i]!, { relative, absolute: 0 });
  });

  test.each(shapes)("betaQuantile(p, %d, %d) agrees from 1e-9 to 1 − 1e-9", async (a, b) => {
    const ps = [1e-9, 0.0005, 0.025, 0.5, 0.975, 0.9995, 1 - 1e-9];
    const theirs = await r.numbers(`qbeta(c(${ps.join(",")}), ${a}, ${b})`);
    for (const [i, p] of ps.entries()) {
      expectClose(betaQuantile(p, a, b), theirs[i]!, { relative: 1e-9, absolute: 1e-15 });
    }
  });
});

describe("signedRootDeviance against the deviance residuals of R's binomial family", () => {
  test("signedRootDeviance is the root of binomial()$dev.resids with the sign of the difference", async () => {
    const shares = [0, 1e-6, 0.004, 0.05, 0.3, 0.5, 0.77, 0.99, 1];
    for (const expected of [0.001, 0.01, 0.25, 0.5, 0.95, 0.999]) {
      const theirs = await r.numbers(
        `y <- c(${shares.join(",")}); sign(y - ${expected}) * sqrt(binomial()$dev.resids(y, rep(${expected}, 9), rep(734.5, 9)))`,
      );
      for (const [i, g] of shares.entries()) {
        expectClose(signedRootDeviance(g, expected, 734.5), theirs[i]!, { relative: 1e-10, absolute: 1e-7 });
      }
    }
  });

  test("shareRange ends where R's deviance residual reaches the critical value", async () => {
    for (const [rank, effective, critical] of [
      [0.5, 100, 3.018],
      [0.01, 5000, 4.1],
      [0.999, 2e5, 3.513],
    ] as const) {
      const { low, high } = shareRange(rank, effective, critical);
      const z = await r.numbers(
        `sqrt(binomial()$dev.resids(c(${low}, ${high}), rep(${rank}, 2), rep(${effective}, 2)))`,
      );
      for (const end of z) expectClose(end, critical, { relative: 1e-9, absolute: 0 });
      expect(low).toBeLessThan(rank);
      expect(high).toBeGreaterThan(rank);
    }
  });
});
