import { cdfOf, sweepCdfs, wasserstein1 } from "@moorline/stats";
import { afterAll, beforeAll, describe, test } from "vitest";
import { expectClose } from "./closeness.js";
import { DATA_SET_PAIRS } from "./data-sets.js";
import { R } from "./r.js";

const TOLERANCE = { relative: 1e-10, absolute: 1e-12 };

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

describe("wasserstein1 against R", () => {
  test.each(DATA_SET_PAIRS)(
    "wasserstein1 is the area between R's two ecdf on $name",
    async ({ first, second }) => {
      const a = cdfOf(await r.numbers(first));
      const b = cdfOf(await r.numbers(second));
      const area = await r.number(
        `a <- ${first}; b <- ${second}; x <- sort(unique(c(a, b))); ` +
          "sum(diff(x) * head(abs(ecdf(a)(x) - ecdf(b)(x)), -1))",
      );
      expectClose(wasserstein1(a, b), area, TOLERANCE);
      expectClose(sweepCdfs(a, b).area, area, TOLERANCE);
    },
  );

  test.each(DATA_SET_PAIRS)(
    "wasserstein1 over ranks .9 to .99 is the area between R's type 1 quantiles on $name",
    async ({ first, second }) => {
      const a = cdfOf(await r.numbers(first));
      const b = cdfOf(await r.numbers(second));
      // Both quantile functions are constant between neighbouring multiples of 1/n and 1/m: take the middle of each piece.
      const area = await r.number(
        `a <- ${first}; b <- ${second}; ` +
          "p <- sort(unique(c(.9, .99, seq_along(a)/length(a), seq_along(b)/length(b)))); p <- p[p>=.9 & p<=.99]; " +
          "mid <- head(p, -1) + diff(p)/2; " +
          "sum(diff(p) * abs(quantile(a, mid, type=1, names=FALSE) - quantile(b, mid, type=1, names=FALSE)))",
      );
      // R's `quantile` moves ranks within 4 roundings of a step to it, so pieces of that width may be told differently.
      expectClose(wasserstein1(a, b, { from: 0.9, to: 0.99 }), area, { relative: 1e-10, absolute: 1e-10 });
    },
  );
});
