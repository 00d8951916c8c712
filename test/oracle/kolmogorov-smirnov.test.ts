import { cdfOf, ksDistance, ksPValue, ksPValueAsymptotic, ksPValueExact } from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { DATA_SET_PAIRS } from "./data-sets.js";
import { R } from "./r.js";

// Live against ks.test of R (stats package). D and both p-values to 1e-10 relative; below that an absolute 1e-12 is allowed,
// for R's exact p is a difference from 1 in doubles in some versions and then carries noise of about 1e-13.
const TOLERANCE = { relative: 1e-10, absolute: 1e-12 };

/**
 * Below λ = 1 ks.test asks its limit series for a tolerance of 1e-6 and stops after one term: what it leaves out is
 * √(2π)/λ·exp(−9π²/(8λ²)), up to 4e-5 near 1. The same C code asked for 1e-15 is held to the full tolerance.
 */
function limitTolerance(
  distance: number,
  n: number,
  m: number,
): { readonly relative: number; readonly absolute: number } {
  const lambda = distance * Math.sqrt((n * m) / (n + m));
  if (lambda >= 1) return TOLERANCE;
  const leftOut = (Math.sqrt(2 * Math.PI) / lambda) * Math.exp(-(9 * Math.PI ** 2) / (8 * lambda ** 2));
  return { relative: 0, absolute: 1.001 * leftOut + 1e-12 };
}

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

describe("ksDistance and its p-values against ks.test of R", () => {
  test.each(DATA_SET_PAIRS)(
    "ksDistance, exact and asymptotic p agree on $name",
    async ({ first, second }) => {
      const a = cdfOf(await r.numbers(first));
      const b = cdfOf(await r.numbers(second));
      const call = (exact: string) => `ks.test(${first}, ${second}, exact=${exact})`;
      const { distance } = ksDistance(a, b);
      expectClose(distance, await r.number(`${call("FALSE")}$statistic`), TOLERANCE);
      expectClose(ksPValueExact(distance, a, b), await r.number(`${call("TRUE")}$p.value`), TOLERANCE);
      const asymptotic = ksPValueAsymptotic(distance, a.n, b.n);
      expectClose(asymptotic, await r.number(`${call("FALSE")}$p.value`), limitTolerance(distance, a.n, b.n));
      const lambda = distance * Math.sqrt((a.n * b.n) / (a.n + b.n));
      const tight = await r.number(`.Call(stats:::C_pkolmogorov_two_limit, ${lambda}, FALSE, 1e-15)`);
      expectClose(asymptotic, tight, TOLERANCE);
    },
  );

  test.each(DATA_SET_PAIRS)(
    "ksDistance's direction agrees with the one-sided tests on $name",
    async (pair) => {
      const a = cdfOf(await r.numbers(pair.first));
      const b = cdfOf(await r.numbers(pair.second));
      // R: "greater" means that the CDF of the first sample lies above that of the second.
      const [aAbove, bAbove] = await r.numbers(
        `c(ks.test(${pair.first}, ${pair.second}, alternative='greater')$statistic, ` +
          `ks.test(${pair.first}, ${pair.second}, alternative='less')$statistic)`,
      );
      const { direction } = ksDistance(a, b);
      if (Math.abs(aAbove! - bAbove!) > 1e-9) expect(direction).toBe(bAbove! > aAbove! ? "above" : "below");
    },
  );

  test("ksPValue switches from the exact law to the limit law where R does", async () => {
    for (const { first, second } of DATA_SET_PAIRS) {
      const a = cdfOf(await r.numbers(first));
      const b = cdfOf(await r.numbers(second));
      if (a.n * b.n >= 10_000) continue;
      const { distance } = ksDistance(a, b);
      const ours = ksPValue({ distance, n: a.n, m: b.n, samples: [a, b] });
      expectClose(ours, await r.number(`ks.test(${first}, ${second})$p.value`), TOLERANCE);
    }
  });

  test("ksPValueExact agrees with psmirnov over every distance of 7 against 9 values, without ties", async () => {
    const a = cdfOf([1, 2, 3, 4, 5, 6, 7]);
    const b = cdfOf([11, 12, 13, 14, 15, 16, 17, 18, 19]);
    for (let k = 1; k <= 63; k += 1) {
      // Distances that no order of the values yields are no less good to ask for.
      const theirs = await r.number(`psmirnov(${k}/63, sizes=c(7,9), lower.tail=FALSE)`);
      expectClose(ksPValueExact(k / 63, a, b), theirs, TOLERANCE);
    }
  });
});
