import {
  cdfOf,
  FROZEN_RANKS,
  freezeThresholds,
  GRID_RANKS,
  quantileOf,
  quantilePairs,
} from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { DATA_SET_PAIRS } from "./data-sets.js";
import { R } from "./r.js";

const TOLERANCE = { relative: 1e-10, absolute: 1e-12 };
const RANKS = [0, ...GRID_RANKS, 1 / 3, 0.123456789, 1];

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

const quantilesOf = (code: string, ranks: readonly number[], type: number) =>
  r.numbers(`quantile(${code}, c(${ranks.join(",")}), type=${type}, names=FALSE)`);

describe("quantileOf against quantile of R", () => {
  test.each(DATA_SET_PAIRS)("quantileOf is R's type 7, its default, on $name", async ({ first, second }) => {
    for (const code of [first, second]) {
      const view = cdfOf(await r.numbers(code));
      const theirs = await quantilesOf(code, RANKS, 7);
      for (const [i, rank] of RANKS.entries()) expectClose(quantileOf(view, rank), theirs[i]!, TOLERANCE);
    }
  });

  test.each([1, 2, 3, 4, 5, 6, 8, 9])(
    "quantileOf is not R's type %i: the check tells the types apart",
    async (type) => {
      const view = cdfOf(await r.numbers("rivers"));
      const theirs = await quantilesOf("rivers", RANKS, type);
      const furthest = Math.max(...RANKS.map((rank, i) => Math.abs(quantileOf(view, rank) - theirs[i]!)));
      expect(furthest).toBeGreaterThan(0.5);
    },
  );

  test("quantilePairs and freezeThresholds carry R's type 7 quantiles of both sides", async () => {
    const baseline = cdfOf(await r.numbers("quakes$depth[quakes$lat<=-20]"));
    const production = cdfOf(await r.numbers("quakes$depth[quakes$lat>-20]"));
    const before = await quantilesOf("quakes$depth[quakes$lat<=-20]", GRID_RANKS, 7);
    const now = await quantilesOf("quakes$depth[quakes$lat>-20]", GRID_RANKS, 7);
    for (const [i, pair] of quantilePairs(baseline, production).entries()) {
      if (pair.baseline !== null) expectClose(pair.baseline, before[i]!, TOLERANCE);
      if (pair.production !== null) expectClose(pair.production, now[i]!, TOLERANCE);
    }
    for (const { rank, value } of freezeThresholds(baseline)) {
      expectClose(value, before[GRID_RANKS.indexOf(rank)]!, TOLERANCE);
    }
    expect(FROZEN_RANKS.every((rank) => GRID_RANKS.includes(rank))).toBe(true);
  });
});
