import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import * as stats from "../src/index.js";

// Every `@example expression // => value` of the doc blocks is run with the package's exports in scope.

const SOURCE = new URL("../src/", import.meta.url);
const examples = readdirSync(SOURCE, { recursive: true, encoding: "utf8" })
  .filter((file) => file.endsWith(".ts"))
  .flatMap((file) =>
    [...readFileSync(new URL(file, SOURCE), "utf8").matchAll(/@example (.+?) \/\/ => (.+)/g)].map(
      ([, expression, value]) => ({ file, expression: expression!, value: value! }),
    ),
  );

function evaluate(expression: string): unknown {
  return new Function(...Object.keys(stats), `return (${expression});`)(...Object.values(stats));
}

describe("examples in doc blocks", () => {
  test("there are at least 14 of them", () => {
    expect(examples.length).toBeGreaterThanOrEqual(14);
  });

  test.each(examples)("$file: $expression is $value", ({ expression, value }) => {
    const actual = evaluate(expression);
    const expected = evaluate(value);
    if (typeof actual === "number" && typeof expected === "number") expect(actual).toBeCloseTo(expected, 14);
    else expect(actual).toEqual(expected);
  });
});
