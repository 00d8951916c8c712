import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  adjustBenjaminiHochberg,
  adjustBenjaminiYekutieli,
} from "../../src/multiplicity/adjusted-p-values.js";
import { normalTwoSided } from "../../src/special/normal.js";
import { Random } from "../kit/random.js";
import { PROPERTY } from "../kit/samples.js";

const pValues = fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { maxLength: 30 });

describe("adjustBenjaminiHochberg and adjustBenjaminiYekutieli", () => {
  test("reject at q exactly what the step-up procedure rejects", () => {
    fc.assert(
      fc.property(pValues, fc.double({ min: 0.01, max: 0.5, noNaN: true }), (values, q) => {
        const sorted = values.toSorted((a, b) => a - b);
        let last = -1;
        for (const [i, p] of sorted.entries()) if (p <= ((i + 1) / sorted.length) * q) last = i;
        const limit = last === -1 ? -1 : sorted[last]!;
        const adjusted = adjustBenjaminiHochberg(values);
        // On the boundary the two ways round differently: leave a rounding of room.
        for (const [i, p] of values.entries()) {
          if (p <= limit) expect(adjusted[i]!).toBeLessThanOrEqual(q * (1 + 1e-12));
          else expect(adjusted[i]!).toBeGreaterThan(q * (1 - 1e-12));
        }
      }),
      PROPERTY,
    );
  });

  test("keep the order of the input, never fall below p nor above 1, and Yekutieli's are the larger", () => {
    fc.assert(
      fc.property(pValues, (values) => {
        const hochberg = adjustBenjaminiHochberg(values);
        const yekutieli = adjustBenjaminiYekutieli(values);
        for (const [i, p] of values.entries()) {
          expect(hochberg[i]!).toBeGreaterThanOrEqual(p);
          expect(yekutieli[i]!).toBeGreaterThanOrEqual(hochberg[i]!);
          expect(yekutieli[i]!).toBeLessThanOrEqual(1);
        }
      }),
      PROPERTY,
    );
  });

  test("none → none; one → itself; anything outside 0 to 1 → INPUT error", () => {
    expect(adjustBenjaminiHochberg([])).toEqual([]);
    expect(adjustBenjaminiYekutieli([0.3])).toEqual([0.3]);
    for (const bad of [Number.NaN, -0.1, 1.1]) {
      expect(() => adjustBenjaminiHochberg([0.5, bad])).toThrow(`a p-value is ${bad}`);
    }
  });

  test("25 true shifts among 500: at most 7 % of Hochberg's finds are false at q = 5 %, over 300 draws", () => {
    const random = new Random(8301);
    let falseShare = 0;
    let found = 0;
    for (let draw = 0; draw < 300; draw += 1) {
      const values = Array.from({ length: 500 }, (_, i) =>
        normalTwoSided(random.normal() + (i < 25 ? 4.5 : 0)),
      );
      const finds = adjustBenjaminiHochberg(values).flatMap((p, i) => (p <= 0.05 ? [i] : []));
      const wrong = finds.filter((i) => i >= 25).length;
      falseShare += finds.length === 0 ? 0 : wrong / finds.length;
      found += finds.length - wrong;
    }
    expect(falseShare / 300).toBeLessThan(0.07);
    expect(found / (300 * 25)).toBeGreaterThan(0.85);
  });
});
