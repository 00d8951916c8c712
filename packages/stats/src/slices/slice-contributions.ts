import type { CdfView } from "../cdf-view.js";
import { effectiveEvents } from "../effective-events.js";
import { eventsAt } from "../events-at.js";
import { countInWords, percentInWords } from "../figures-in-words.js";
import { freezeThresholds } from "../freeze-thresholds.js";
import { signedRootDeviance } from "../signed-root-deviance.js";
import { normalExceededBy } from "../special/normal.js";
import { smoothedShare } from "../sway/block-counts.js";
import { type SlicePart, type SliceSides, sliceWeights, splitDistance } from "./split-distance.js";
import { splitExceedance } from "./split-exceedance.js";

/** One slice with what it adds to the change of the whole. */
export interface SliceContribution {
  readonly slice: string;
  /** Finite values. */
  readonly n: { readonly baseline: number; readonly production: number };
  /** Share of the whole. */
  readonly weight: { readonly baseline: number; readonly production: number };
  /** To the Wasserstein-1 distance, in the feature's unit. */
  readonly wasserstein: SlicePart;
  /** `wasserstein` over the whole distance; null where that is 0. All of them sum to 1. */
  readonly share: number | null;
  /** To the change of the shares beyond the baseline's p1 and p99. */
  readonly exceedance: { readonly lower: SlicePart; readonly upper: SlicePart };
  /** Largest |z| of the slice's own change over the 11 thresholds; null where it has no values on a side. */
  readonly z: number | null;
  /** z of its part of the traffic; positive: more than in the baseline. */
  readonly trafficZ: number;
}

export interface SliceAnswer {
  /** Of the mixtures of the slices. */
  readonly distance: number;
  readonly exceedanceChange: { readonly lower: number; readonly upper: number };
  /** |z| from which a slice stands out, over all slices. */
  readonly critical: number;
  /** The slice that carries most first. */
  readonly slices: readonly SliceContribution[];
  /** In words: which slice carries the change, or that the traffic changed, or that none stands out. */
  readonly sentence: string;
}

export interface SliceOptions {
  /** Of dependence between events; default 1. */
  readonly designEffect?: number;
}

const LEAST_CRITICAL = 4;
const LEVEL = 0.001;

/**
 * Which slice carries a change: an exact split of W1 and of both tails' exceedance, slices that stand out first.
 *
 * Definition  a slice stands out when its own change has |z| ≥ max(4, the two-sided .001 level over all slices). Of those the one that adds most to W1
 *             leads; then those whose part of the traffic changed that much, by |z|; then the rest by what they add.
 * Shape       disjoint slices that make up the whole, with values on both sides over all.
 * Source      docs/slices.md
 */
export function sliceContributions(slices: readonly SliceSides[], options: SliceOptions = {}): SliceAnswer {
  const designEffect = Math.max(1, options.designEffect ?? 1);
  const weights = sliceWeights(slices);
  const { distance, parts } = splitDistance(slices);
  const whole = largest(slices.map((one) => one.baseline));
  const edges = freezeThresholds(whole);
  const lower = splitExceedance(slices, edges[1]!.value);
  const upper = splitExceedance(slices, edges[9]!.value);
  const [n, m] = [
    totalOf(slices, (one) => one.baselineEvents ?? one.baseline.n),
    totalOf(slices, (one) => one.production.n),
  ];
  const rows = slices.map((one, s): SliceContribution => {
    const { within, mix } = parts[s]!;
    return {
      slice: one.slice,
      n: { baseline: one.baselineEvents ?? one.baseline.n, production: one.production.n },
      weight: { baseline: weights.baseline[s]!, production: weights.production[s]! },
      wasserstein: { within, mix },
      share: distance === 0 ? null : (within + mix) / distance,
      exceedance: { lower: negated(lower.parts[s]!), upper: upper.parts[s]! },
      z: ownChange(one, designEffect),
      trafficZ: trafficChange(weights.baseline[s]!, weights.production[s]!, n, m, designEffect),
    };
  });
  const critical = Math.max(LEAST_CRITICAL, normalExceededBy(LEVEL / 2 / slices.length));
  const ranked = rows.sort(
    (a, b) => rankOf(b, critical) - rankOf(a, critical) || leading(b, critical) - leading(a, critical),
  );
  return {
    distance,
    exceedanceChange: { lower: -lower.change, upper: upper.change },
    critical,
    slices: ranked,
    sentence: inWords(ranked, critical),
  };
}

/** A split of the share above is that of the share at or below with the sign turned. */
function negated({ within, mix }: SlicePart): SlicePart {
  return { within: -within, mix: -mix };
}

function largest(views: readonly CdfView[]): CdfView {
  return views.reduce((most, view) => (view.n > most.n ? view : most));
}

function totalOf(slices: readonly SliceSides[], of: (one: SliceSides) => number): number {
  return slices.reduce((sum, one) => sum + of(one), 0);
}

/** 2: stands out by itself; 1: by its part of the traffic; 0: neither. */
function rankOf({ z, trafficZ }: SliceContribution, critical: number): number {
  if (z !== null && Math.abs(z) >= critical) return 2;
  return Math.abs(trafficZ) >= critical ? 1 : 0;
}

function leading(row: SliceContribution, critical: number): number {
  if (rankOf(row, critical) === 1) return Math.abs(row.trafficZ);
  return row.wasserstein.within + row.wasserstein.mix;
}

function ownChange({ baseline, production }: SliceSides, designEffect: number): number | null {
  if (baseline.n === 0 || production.n === 0) return null;
  const effective = effectiveEvents(baseline.n, production.n, designEffect);
  let strongest = 0;
  for (const { value } of freezeThresholds(baseline)) {
    const expected = smoothedShare(eventsAt(baseline, value).upTo, baseline.n);
    if (effective * Math.min(expected, 1 - expected) < 1) continue;
    const observed = eventsAt(production, value).upTo / production.n;
    const error = baseline.rankErrorAt(expected) + production.rankErrorAt(expected);
    const proven =
      Math.abs(observed - expected) <= error ? expected : observed - Math.sign(observed - expected) * error;
    const z = signedRootDeviance(proven, expected, effective);
    if (Math.abs(z) > Math.abs(strongest)) strongest = z;
  }
  return strongest;
}

function trafficChange(before: number, now: number, n: number, m: number, designEffect: number): number {
  const effective = effectiveEvents(n, m, designEffect);
  const least = 0.5 / (effective + 1);
  return signedRootDeviance(now, Math.min(1 - least, Math.max(least, before)), effective);
}

function inWords(ranked: readonly SliceContribution[], critical: number): string {
  const first = ranked[0];
  if (first === undefined) return "there is no slice";
  const n = `n = ${countInWords(first.n.production)} against ${countInWords(first.n.baseline)}`;
  const rank = rankOf(first, critical);
  if (rank === 2 && first.share !== null) {
    const others = ranked.filter((row) => rankOf(row, critical) === 2).length - 1;
    const more =
      others === 0
        ? "no other stands out"
        : `${others === 1 ? "one other stands" : `${others} others stand`} out too`;
    return `${first.slice} carries ${percentInWords(first.share)} of the change; ${more}; ${n}`;
  }
  if (rank === 1) {
    const { baseline, production } = first.weight;
    return `the traffic changed: ${first.slice} is ${percentInWords(production)} of the events, ${percentInWords(baseline)} in the baseline; no slice changed by itself; ${n}`;
  }
  return "no slice stands out";
}
