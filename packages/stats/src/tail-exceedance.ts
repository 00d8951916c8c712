import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";
import { clopperPearson } from "./clopper-pearson.js";
import { type DesignEffect, designEffectAt } from "./design-effect.js";
import { effectiveEvents } from "./effective-events.js";
import { eventsAt } from "./events-at.js";
import type { ThresholdCounts } from "./numeric-side.js";
import { quantileOf } from "./quantile-of.js";
import { countAt } from "./threshold-shares.js";

export interface TailExceedance {
  /** Of the baseline; the threshold was taken there. */
  readonly rank: number;
  readonly threshold: number;
  /** Share of production's values beyond the threshold. */
  readonly exceedance: number;
  /** Exceedance over the baseline's own share beyond the threshold. */
  readonly ratio: number;
  /** 95 % interval of the ratio. */
  readonly interval: readonly [low: number, high: number];
  /** The baseline's own share beyond the threshold; not 1 − rank where values repeat. */
  readonly expected: number;
  /** True when values equal to the threshold count as beyond it. */
  readonly inclusive: boolean;
  /** False when production's count was read from a digest. */
  readonly exactCount: boolean;
}

export interface TailExceedanceInput {
  readonly baseline: CdfView;
  readonly production: CdfView;
  readonly rank: number;
  readonly tail: "lower" | "upper";
  /** Default: the baseline's quantile at the rank. */
  readonly threshold?: number;
  /** Exact counts at the thresholds, where they were kept. */
  readonly thresholdCounts?: {
    readonly baseline?: ThresholdCounts | null | undefined;
    readonly production?: ThresholdCounts | null | undefined;
  };
  /** Default 1: independent events. */
  readonly designEffect?: DesignEffect;
}

/**
 * How much more, or less, of production lies beyond a baseline quantile than of the baseline itself.
 *
 * Definition  x = Q_F(rank); upper tail: share above x, lower tail: share below x; ratio = production's share over the baseline's exact share.
 *             Where the baseline's share is less than half of what the rank says (an atom sits on x), values equal to x count too.
 *             A lower tail read from threshold counts always counts them: the counters hold ≤.
 * Units       shares in [0, 1]; ratio ≥ 0, 1 when nothing changed.
 * Accuracy    interval: Clopper–Pearson with m′ = nm/(n + m) trials and K·m′/m events, for the baseline is a sample too; coverage
 *             .953–.984 for the nominal .95 (docs/tail-exceedance.md).
 * Edges       nothing beyond → ratio 0 with a low of 0; everything → high 1/expected.
 * Source      Clopper & Pearson 1934, doi:10.1093/biomet/26.4.404.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 * @throws MOORLINE_INPUT_RANK_RANGE when the rank is not in [0, 1]
 */
export function tailExceedance(input: TailExceedanceInput): TailExceedance {
  const { baseline, production, rank } = input;
  if (baseline.n === 0 || production.n === 0) {
    throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "tail exceedance" });
  }
  const threshold = input.threshold ?? quantileOf(baseline, rank);
  const { share: expected, inclusive } = baselineShare(input, threshold);
  const { events, exactCount } = productionEvents(input, threshold, inclusive);
  const exceedance = events / production.n;
  const trials = effectiveEvents(baseline.n, production.n, designEffectAt(input.designEffect, rank));
  const [low, high] = clopperPearson(Math.min(trials, exceedance * trials), trials);
  return {
    rank,
    threshold,
    exceedance,
    ratio: exceedance / expected,
    interval: [low / expected, high / expected],
    expected,
    inclusive,
    exactCount,
  };
}

function baselineShare(
  input: TailExceedanceInput,
  threshold: number,
): { readonly share: number; readonly inclusive: boolean } {
  const { baseline, rank, tail, thresholdCounts } = input;
  const kept = countAt(baseline, threshold, thresholdCounts?.baseline).events;
  const view = eventsAt(baseline, threshold);
  const strict = tail === "upper" ? baseline.n - kept : view.below;
  const closed = tail === "upper" ? baseline.n - view.below : kept;
  const counters = thresholdCounts?.production?.values.includes(threshold) ?? false;
  const nominal = tail === "upper" ? 1 - rank : rank;
  const inclusive = (tail === "lower" && counters) || strict / baseline.n < nominal / 2;
  // A share of 0 cannot be divided by: the threshold then lies outside the baseline; half an event stands for it.
  return { share: Math.max(inclusive ? closed : strict, 0.5) / baseline.n, inclusive };
}

function productionEvents(
  input: TailExceedanceInput,
  threshold: number,
  inclusive: boolean,
): { readonly events: number; readonly exactCount: boolean } {
  const { production, tail, thresholdCounts } = input;
  const upTo = countAt(production, threshold, thresholdCounts?.production);
  if (tail === "upper" && !inclusive) return { events: production.n - upTo.events, exactCount: upTo.counted };
  if (tail === "lower" && inclusive) return { events: upTo.events, exactCount: upTo.counted };
  const { below } = eventsAt(production, threshold);
  return { events: tail === "upper" ? production.n - below : below, exactCount: production.exact };
}
