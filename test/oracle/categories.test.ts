import { homogeneityTest, rateChange, totalVariation, unseenEvents } from "@moorline/stats";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { expectClose } from "./closeness.js";
import { R } from "./r.js";

const TOLERANCE = { relative: 1e-10, absolute: 1e-14 };

let r: R;
beforeAll(async () => {
  r = await R.start();
});
afterAll(() => r.close());

const TABLES = [
  { name: "a 2 × 3 table", code: "rbind(c(50,30,20),c(60,20,20))" },
  { name: "HairEyeColor, men, 4 × 4", code: "HairEyeColor[,,1]" },
  { name: "UCBAdmissions, department A, 2 × 2", code: "UCBAdmissions[,,1]" },
  { name: "Titanic by class and survival, 4 × 2", code: "apply(Titanic, c(1, 4), sum)" },
  {
    name: "esoph cases and controls by age, 2 × 6",
    code: "rbind(tapply(esoph$ncases, esoph$agegp, sum), tapply(esoph$ncontrols, esoph$agegp, sum))",
  },
  { name: "a table with a zero", code: "rbind(c(12,0,40),c(9,6,33))" },
  { name: "10⁶ events", code: "rbind(c(250000,250000,500000),c(251000,249500,499500))" },
];

describe("homogeneityTest against chisq.test of R", () => {
  test.each(TABLES)("Pearson's statistic, G, df and both p-values agree on $name", async ({ code }) => {
    const [rows, columns] = (await r.numbers(`dim(${code})`)) as [number, number];
    const cells = await r.numbers(`as.vector(t(unclass(${code})))`);
    const table = Array.from({ length: rows }, (_, i) => cells.slice(i * columns, (i + 1) * columns));
    const theirs = await r.numbers(
      `o <- unclass(${code}); e <- outer(rowSums(o), colSums(o))/sum(o); g <- 2*sum(ifelse(o > 0, o*log(o/e), 0)); ` +
        "t <- chisq.test(o, correct=FALSE); " +
        "c(t$statistic, t$parameter, t$p.value, g, pchisq(g, t$parameter, lower.tail=FALSE))",
    );
    const { chiSquare, g } = homogeneityTest(table);
    expectClose(chiSquare.statistic, theirs[0]!, TOLERANCE);
    expect([chiSquare.df, g.df]).toEqual([theirs[1], theirs[1]]);
    expectClose(chiSquare.pValue, theirs[2]!, TOLERANCE);
    // R's G is a sum of large terms that cancel; ours is summed cell by cell.
    expectClose(g.statistic, theirs[3]!, { relative: 1e-9, absolute: 0 });
    expectClose(g.pValue, theirs[4]!, { relative: 1e-8, absolute: 0 });
  });

  test("prop.test of R without correction is Pearson's statistic of a 2 × 2 table", async () => {
    const theirs = await r.numbers(
      "t <- prop.test(c(30,10), c(1000,1000), correct=FALSE); c(t$statistic, t$p.value)",
    );
    const { chiSquare } = homogeneityTest([
      [30, 970],
      [10, 990],
    ]);
    expectClose(chiSquare.statistic, theirs[0]!, TOLERANCE);
    expectClose(chiSquare.pValue, theirs[1]!, TOLERANCE);
  });
});

describe("the rest of a categorical comparison against R", () => {
  test("rateChange's z is the signed root of the deviance of a binomial glm with an offset", async () => {
    const theirs = await r.number(
      "e <- 20.5/1001; y <- 30/1000; m <- 500; d <- binomial()$dev.resids(y, e, 1); sign(y - e)*sqrt(m*d)",
    );
    const { z } = rateChange({ events: 20, trials: 1000 }, { events: 30, trials: 1000 });
    expectClose(z, theirs, TOLERANCE);
  });

  test("unseenEvents has the tail of R's binomial law", async () => {
    const theirs = await r.number("pbinom(70 - 1, 70 + 524, 1000/11000, lower.tail=FALSE)");
    const { pValue } = unseenEvents({ n: 10_000, singletons: 524, m: 1000, unseen: Array(70).fill(1) });
    expectClose(pValue, theirs, TOLERANCE);
  });

  test("totalVariation is half of the sum of differences of prop.table", async () => {
    const theirs = await r.number(
      "p <- prop.table(rbind(c(50,30,20),c(61,20,20)), 1); sum(abs(p[1,] - p[2,]))/2",
    );
    const { distance } = totalVariation([
      { baseline: 50, production: 61 },
      { baseline: 30, production: 20 },
      { baseline: 20, production: 20 },
    ]);
    expectClose(distance, theirs, TOLERANCE);
  });
});
