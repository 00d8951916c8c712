import {
  chiSquareExceededBy,
  chiSquareTail,
  gammaTails,
  normalExceededBy,
  normalTail,
} from "@moorline/stats";
import { afterAll, beforeAll, describe, test } from "vitest";
import { expectClose } from "./closeness.js";
import { R } from "./r.js";

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

const DEGREES = [1, 2, 5, 9, 49, 999, 100_000, 2_000_000];

describe("chiSquareTail and chiSquareExceededBy against pchisq and qchisq of R", () => {
  test.each(DEGREES)("both tails agree with %i degrees of freedom, to 12 digits", async (df) => {
    for (const z of [-4, -1, 0, 1, 4, 12]) {
      const x = Math.max(1e-3, df + z * Math.sqrt(2 * df));
      const [upper, lower] = await r.numbers(`c(pchisq(${x}, ${df}, lower.tail=FALSE), pchisq(${x}, ${df}))`);
      // The exponent of the density is a difference of terms of size df: its rounding grows with it.
      const tolerance = { relative: 1e-12 + df * 1e-16, absolute: 0 };
      expectClose(chiSquareTail(x, df), upper!, tolerance);
      expectClose(gammaTails(df / 2, x / 2).lower, lower!, tolerance);
    }
  });

  test.each(DEGREES)("quantiles agree with %i degrees of freedom", async (df) => {
    for (const p of [0.99, 0.5, 0.05, 0.001, 1e-9]) {
      const theirs = await r.number(`qchisq(${p}, ${df}, lower.tail=FALSE)`);
      expectClose(chiSquareExceededBy(p, df), theirs, { relative: 1e-10, absolute: 0 });
    }
  });
});

describe("normalTail and normalExceededBy against pnorm and qnorm of R", () => {
  test("agree from −6 to 35 and from .5 to 1e-300", async () => {
    for (const z of [-6, -1, -0.2, 0, 0.5, 1.96, 6, 35]) {
      expectClose(normalTail(z), await r.number(`pnorm(${z}, lower.tail=FALSE)`), {
        relative: 1e-12,
        absolute: 0,
      });
    }
    for (const p of [0.5, 0.3, 0.025, 1e-6, 1e-100, 1e-300]) {
      const theirs = await r.number(`qnorm(${p}, lower.tail=FALSE)`);
      expectClose(normalExceededBy(p), theirs, { relative: 1e-10, absolute: 1e-12 });
    }
  });
});
