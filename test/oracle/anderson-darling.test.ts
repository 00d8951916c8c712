import {
  andersonDarling,
  andersonDarlingStatistic,
  andersonDarlingTail,
  andersonDarlingVariance,
  cdfOf,
} from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { DATA_SET_PAIRS } from "./data-sets.js";
import { R } from "./r.js";

// R's base has no two-sample Anderson–Darling test: the equations of Scholz & Stephens 1987 stand here in R, summed as printed.
const EQUATIONS = `
ad <- function(groups, midrank) {
  z <- sort(unique(unlist(groups))); N <- length(unlist(groups))
  l <- sapply(z, function(v) sum(unlist(groups) == v))
  B <- cumsum(l); if (midrank) B <- B - l/2
  total <- 0
  for (g in groups) {
    f <- sapply(z, function(v) sum(g == v)); M <- cumsum(f); if (midrank) M <- M - f/2
    bottom <- B*(N - B); if (midrank) bottom <- bottom - N*l/4
    keep <- if (midrank) seq_along(z) else head(seq_along(z), -1)
    total <- total + sum((l/N*(N*M - length(g)*B)^2/bottom)[keep])/length(g)
  }
  if (midrank) total*(N - 1)/N else total
}
advar <- function(n) {
  k <- length(n); N <- sum(n); H <- sum(1/n); i <- 1:(N - 1); h <- sum(1/i)
  g <- sum(sapply(1:(N - 2), function(i) sum(1/((N - i)*((i + 1):(N - 1))))))
  a <- (4*g - 6)*(k - 1) + (10 - 6*g)*H
  b <- (2*g - 4)*k^2 + 8*h*k + (2*g - 14*h - 4)*H - 8*h + 4*g - 6
  c <- (6*h + 2*g - 2)*k^2 + (4*h - 4*g + 6)*k + (2*h - 6)*H + 4*h
  d <- (2*h + 6)*k^2 - 4*h*k
  (a*N^3 + b*N^2 + c*N + d)/((N - 1)*(N - 2)*(N - 3))
}
0`;

const TOLERANCE = { relative: 1e-10, absolute: 1e-12 };

let r: R;
beforeAll(async () => {
  r = await R.start();
  await r.number(EQUATIONS);
});
afterAll(() => r.close());

describe("andersonDarlingStatistic against the printed equations in R", () => {
  test.each(DATA_SET_PAIRS)("both versions and the variance agree on $name", async ({ first, second }) => {
    const a = await r.numbers(first);
    const b = await r.numbers(second);
    const theirs = await r.numbers(
      `g <- list(${first}, ${second}); c(ad(g, TRUE), ad(g, FALSE), advar(lengths(g)))`,
    );
    const views = [cdfOf(a), cdfOf(b)] as const;
    expectClose(andersonDarlingStatistic(views), theirs[0]!, TOLERANCE);
    expectClose(andersonDarlingStatistic(views, "right"), theirs[1]!, TOLERANCE);
    expectClose(andersonDarlingVariance([a.length, b.length])!, theirs[2]!, TOLERANCE);
    expectClose(andersonDarling(...views).standardised, (theirs[0]! - 1) / Math.sqrt(theirs[2]!), TOLERANCE);
  });
});

describe("andersonDarlingTail against R", () => {
  test.each([0.2, 0.5, 1, 2.492, 3.878, 7])(
    "P(A² > %f) is that of Anderson & Darling 1954's series, integrated by R",
    async (x) => {
      // F(z) = √(2π)/z Σ_j binom(−½, j)(4j + 1) e^(−(4j+1)²π²/(8z)) ∫ exp(z/(8(w² + 1)) − (4j+1)²π²w²/(8z)) dw.
      const below =
        await r.number(`z <- ${x}; sqrt(2*pi)/z * sum(sapply(0:12, function(j) { t <- (4*j + 1)^2*pi^2/(8*z);
        choose(-1/2, j)*(4*j + 1)*exp(-t)*integrate(function(w) exp(z/(8*(w^2 + 1)) - t*w^2), 0, Inf, rel.tol=1e-12)$value }))`);
      expectClose(andersonDarlingTail(x), 1 - below, { relative: 0, absolute: 1e-11 });
    },
  );
});

describe("the four laboratories of Scholz & Stephens 1987 (smoothness of paper, 8 values each)", () => {
  // Table 4 of the paper; its A² and T are 8.3559 and 4.449. The digits beyond, and the midrank row, are regression values (SciPy 1.17).
  const LABORATORIES = [
    [38.7, 41.5, 43.8, 44.5, 45.5, 46.0, 47.7, 58.0],
    [39.2, 39.3, 39.7, 41.4, 41.8, 42.9, 43.3, 45.8],
    [34.0, 35.0, 39.0, 40.0, 43.0, 43.0, 44.0, 45.0],
    [34.0, 34.8, 34.8, 35.4, 37.2, 37.8, 41.2, 42.8],
  ].map(cdfOf);

  test.each([
    { ties: "right", statistic: 8.3558723092, standardised: 4.4492622324 },
    { ties: "midrank", statistic: 8.3926093268, standardised: 4.4797806271 },
  ] as const)("the $ties version gives $statistic, standardised $standardised", (row) => {
    const statistic = andersonDarlingStatistic(LABORATORIES, row.ties);
    expectClose(statistic, row.statistic, { relative: 0, absolute: 6e-11 });
    const variance = andersonDarlingVariance([8, 8, 8, 8])!;
    expectClose((statistic - 3) / Math.sqrt(variance), row.standardised, { relative: 0, absolute: 6e-11 });
  });

  test("the figures as the paper prints them: 8.3559 and 4.449", () => {
    const statistic = andersonDarlingStatistic(LABORATORIES, "right");
    expect(statistic.toFixed(4)).toBe("8.3559");
    expect(((statistic - 3) / Math.sqrt(andersonDarlingVariance([8, 8, 8, 8])!)).toFixed(3)).toBe("4.449");
  });

  test.each([
    [0.25, 0.325],
    [0.1, 1.226],
    [0.05, 1.961],
    [0.025, 2_718 / 1_000],
    [0.01, 3.752],
  ])("the paper's percentile for two samples at %f, T = %f, has that probability within 3 %%", (p, t) => {
    const limit = 1 + Math.sqrt((2 * (Math.PI ** 2 - 9)) / 3) * t;
    expectClose(andersonDarlingTail(limit), p, { relative: 0.03, absolute: 0 });
  });
});
