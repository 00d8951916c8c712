import { describe, expect, test } from "vitest";
import { FROZEN_RANKS } from "../../src/grid-ranks.js";
import { findBreak, findOnset, type OnsetWindow } from "../../src/onset/find-onset.js";
import { NORMAL_SHARES, ONSET_CHANGES, onsetCase } from "../kit/onset-cases.js";

const EXPECTED = FROZEN_RANKS;
/** Windows of a hundred values whose shares are those given, at every threshold but the median's as expected. */
const windowsOf = (medianShares: readonly number[], n = 100): OnsetWindow[] =>
  medianShares.map((share, w) => ({
    startMs: 60_000 * w,
    endMs: 60_000 * (w + 1),
    n,
    atOrBelow: FROZEN_RANKS.map((rank) => (rank === 0.5 ? share : rank) * n),
  }));
const repeat = (share: number, times: number) => Array<number>(times).fill(share);

describe("findOnset(input)", () => {
  test("findOnset finds the window from which on a share is another, with the share since then", () => {
    const found = findOnset({
      windows: windowsOf([...repeat(0.5, 30), ...repeat(0.7, 12)]),
      expected: EXPECTED,
    });
    expect(found).toMatchObject({
      found: true,
      atMs: 30 * 60_000,
      rank: 0.5,
      expected: 0.5,
      mayBeEarlier: false,
    });
    if (found.found) {
      expect(found.observed).toBeCloseTo(0.7, 12);
      expect(found.interval.fromMs).toBeLessThanOrEqual(found.atMs);
      expect(found.interval.toMs).toBeGreaterThanOrEqual(found.atMs);
      // LL = 1,200·KL(.7, .5).
      expect(found.evidence).toBeCloseTo(1_200 * (0.7 * Math.log(1.4) + 0.3 * Math.log(0.6)), 9);
    }
  });

  test("findOnset says that a change may be older than the range", () => {
    expect(findOnset({ windows: windowsOf(repeat(0.7, 20)), expected: EXPECTED })).toMatchObject({
      found: true,
      atMs: 0,
      mayBeEarlier: true,
    });
  });

  test.each([
    { name: "nothing changed", windows: windowsOf(repeat(0.5, 50)), reason: /no lasting change/ },
    {
      name: "a change that is over",
      windows: windowsOf([...repeat(0.5, 20), ...repeat(0.7, 3), ...repeat(0.5, 60)]),
      reason: /no lasting change/,
    },
    { name: "no window", windows: [], reason: /too few windows with values: 0/ },
    {
      name: "windows without values",
      windows: windowsOf(repeat(0.7, 50), 0),
      reason: /too few windows with values: 0/,
    },
    { name: "three windows", windows: windowsOf(repeat(0.9, 3)), reason: /too few windows with values: 3/ },
  ])("findOnset of $name finds nothing and says why", ({ windows, reason }) => {
    const answer = findOnset({ windows, expected: EXPECTED });
    expect(answer.found).toBe(false);
    expect(answer.reason).toMatch(reason);
  });

  test("findOnset passes over empty windows, and divides the evidence by the design effect", () => {
    const windows = windowsOf([...repeat(0.5, 20), ...repeat(0.65, 10)]);
    const gappy = windows.flatMap((w, i) =>
      i % 3 === 0 ? [{ ...w, n: 0, atOrBelow: FROZEN_RANKS.map(() => 0) }] : [w],
    );
    const found = findOnset({ windows: gappy, expected: EXPECTED });
    expect(found.found).toBe(true);
    const plain = findOnset({ windows, expected: EXPECTED });
    const dependent = findOnset({ windows, expected: EXPECTED, designEffect: () => 2 });
    if (plain.found && dependent.found) expect(dependent.evidence).toBeCloseTo(plain.evidence / 2, 9);
    expect(findOnset({ windows, expected: EXPECTED, designEffect: () => 20 }).found).toBe(false);
  });

  test.each([0, 0.8])(
    "findOnset covers the truth at about its stated rate in simulated cases, AR(%d)",
    (phi) => {
      const CASES = 8;
      const effect = phi === 0 ? 1 : 8;
      let covered = 0;
      let cases = 0;
      for (const [c, change] of Object.keys(ONSET_CHANGES).entries()) {
        for (let i = 0; i < CASES; i += 1) {
          const { windows, truth } = onsetCase(change, phi, 60_000 + 101 * i + 7 * c);
          const found = findOnset({ windows, expected: NORMAL_SHARES, designEffect: () => effect });
          if (!found.found) continue;
          cases += 1;
          if (found.interval.fromMs <= truth && truth <= found.interval.toMs) covered += 1;
        }
      }
      expect(cases).toBeGreaterThanOrEqual(36);
      // Of forty at 95 %, fewer than 34 come once in a thousand.
      expect(covered / cases).toBeGreaterThanOrEqual(0.85);
    },
  );
});

describe("findBreak(windows)", () => {
  test("findBreak finds where windows differ most from those before, without a baseline", () => {
    const windows = windowsOf([...repeat(0.3, 25), ...repeat(0.45, 15)]);
    expect(findBreak(windows)).toMatchObject({
      atMs: 25 * 60_000,
      rank: 0.5,
      before: expect.closeTo(0.3, 9),
      after: expect.closeTo(0.45, 9),
    });
  });

  test("findBreak of fewer than two windows with values is null", () => {
    expect(findBreak(windowsOf([0.5]))).toBeNull();
    expect(findBreak([])).toBeNull();
  });
});
