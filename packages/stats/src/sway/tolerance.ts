import { effectiveEvents } from "../effective-events.js";
import { smoothedShare } from "./block-counts.js";
import { type DesignEffects, designEffectAt, FEWEST_POOLED } from "./design-effects.js";
import { profileShare } from "./hour-profile.js";
import type { Sway } from "./learn-sway.js";
import { BELOW_LOWEST, MISSING, WATCHED, type WatchedCounts } from "./watched-counts.js";

/** What a tolerance was learnt from: the baseline's blocks by time or by rows, or nothing (events taken as independent). */
export type ToleranceBasis = "time" | "rows" | "assumed";

export interface ToleranceInput {
  /** Counts of the whole baseline. */
  readonly baseline: WatchedCounts;
  /** Null: too few blocks; events are taken as independent of each other, and `basis` says so. */
  readonly sway: Sway | null;
  /** Length of an evaluated window. */
  readonly windowMs: number;
}

const DAY_MS = 86_400_000;
/** Scales without a block to learn from end here. */
const LONGEST_ASSUMED = 8;

/**
 * How far the watched shares of one feature may be from the baseline at one horizon: what is expected, and how many independent events a window's
 * events are worth.
 */
export class Tolerance {
  readonly windowMs: number;
  readonly basis: ToleranceBasis;
  readonly isSeasonal: boolean;
  readonly #input: ToleranceInput;
  readonly #sway: Sway | null;
  readonly #effects: readonly DesignEffects[];
  readonly #expected: readonly number[];
  /** By watched share: variance that the baseline itself adds, over e(1 − e). */
  readonly #baselineError: readonly number[];

  constructor(input: ToleranceInput) {
    const { baseline, sway, windowMs } = input;
    this.#input = input;
    this.windowMs = windowMs;
    this.basis = sway === null ? "assumed" : sway.basis;
    this.#sway = sway;
    // A window of a day or more holds every hour: what is expected of it is the whole baseline's share.
    const seasonal = sway !== null && windowMs < DAY_MS ? sway.seasonal : null;
    this.isSeasonal = seasonal !== null;
    this.#effects = seasonal?.effects ?? sway?.effects ?? [];
    this.#expected = Array.from({ length: WATCHED }, (_, share) => {
      if (share === MISSING) return smoothedShare(baseline.missing, baseline.events);
      const hits = share === BELOW_LOWEST ? baseline.belowLowest : baseline.atOrBelow[share];
      return smoothedShare(hits ?? 0, baseline.finite);
    });
    this.#baselineError = this.#expected.map((_, share) => {
      if (seasonal !== null) {
        const totals = seasonal.profile.totals[countedAs(share)]!;
        const eachHour = totals.reduce((sum, n) => sum + 1 / n, 0) / totals.length;
        return designEffectAt(this.#effects[countedAs(share)]!, 3_600_000 / sway!.lengthMs!) * eachHour;
      }
      const total = share === MISSING ? baseline.events : baseline.finite;
      if (total === 0) return Number.POSITIVE_INFINITY;
      return (this.#effects[countedAs(share)]?.effects.at(-1) ?? 1) / total;
    });
  }

  /** The same baseline and sway at another horizon. */
  forWindow(windowMs: number): Tolerance {
    return windowMs === this.windowMs ? this : new Tolerance({ ...this.#input, windowMs });
  }

  /** Is this share one that can tell something the others cannot? All are, but for the last where no atom stands at the lowest threshold. */
  watches(share: number): boolean {
    return share !== BELOW_LOWEST || this.#input.baseline.belowLowest !== null;
  }

  /** Share expected in a window. */
  expected(share: number, endMs: number | null): number {
    if (!this.isSeasonal || endMs === null || share === BELOW_LOWEST) return this.#expected[share]!;
    return profileShare(this.#sway!.seasonal!.profile, share, endMs - this.windowMs, endMs);
  }

  /** Are there enough blocks to know how much `windows` pooled windows with `total` events vary? A single window is always judged. */
  knows(windows: number, total: number, share: number): boolean {
    if (windows === 1) return true;
    if (this.#sway === null) return windows <= LONGEST_ASSUMED;
    return this.#span(windows, total, share) * FEWEST_POOLED <= this.#sway.blocks;
  }

  /** Design effect of the pooled events of `windows` windows, baseline error not included. */
  designEffect(share: number, windows: number, total: number): number {
    const sway = this.#sway;
    if (sway === null) return 1;
    const span = this.#span(windows, total, share);
    const effect = designEffectAt(this.#effects[countedAs(share)]!, span);
    // A baseline that was thinned out saw less of what neighbouring events share: its excess grows with the events of a window.
    const usual = span * sway.meanTotals[countedAs(share)]!;
    return total > usual && usual > 0 ? 1 + ((effect - 1) * total) / usual : effect;
  }

  /** What finite values are worth beside the baseline if they are independent: nm/(n + m). */
  independentValues(finite: number): number {
    return effectiveEvents(this.#input.baseline.finite, finite);
  }

  /** Finite values of the baseline. */
  get baselineValues(): number {
    return this.#input.baseline.finite;
  }

  /** Effective events of the pooled windows, baseline error included: M = 1/(D/total + D(longest)/n). */
  effective(share: number, windows: number, total: number): number {
    if (total <= 0) return 0;
    return 1 / (this.designEffect(share, windows, total) / total + this.#baselineError[share]!);
  }

  /** Blocks that the pooled windows are as long as. */
  #span(windows: number, total: number, share: number): number {
    const { lengthMs, meanTotals } = this.#sway!;
    if (lengthMs !== null) return (windows * this.windowMs) / lengthMs;
    return total / Math.max(1, meanTotals[countedAs(share)]!);
  }
}

/** Blocks are not counted strictly below the lowest threshold: what lies at or below it varies at least as much. */
function countedAs(share: number): number {
  return share === BELOW_LOWEST ? 0 : share;
}
