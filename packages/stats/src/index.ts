export {
  type AndersonDarling,
  type AndersonDarlingOptions,
  andersonDarling,
} from "./anderson-darling/anderson-darling.js";
export { andersonDarlingTail } from "./anderson-darling/limit-law.js";
export { andersonDarlingVariance } from "./anderson-darling/moments.js";
export { andersonDarlingStatistic, type TieVersion } from "./anderson-darling/statistic.js";
export { alignCategories, type CategoryBin } from "./categorical/align-categories.js";
export type {
  CategoricalComparison,
  ComparedCategories,
  ThinCategories,
} from "./categorical/categorical-comparison.js";
export {
  CATEGORY_FLOORS,
  type CategoricalVerdict,
  type CategoryPlace,
  categoricalVerdict,
} from "./categorical/categorical-verdict.js";
export { type CategoryCounts, categoryCountsOf } from "./categorical/category-counts.js";
export { categoryInWords } from "./categorical/category-in-words.js";
export { type CategoryMover, categoryMovers } from "./categorical/category-movers.js";
export { type CompareCategoriesOptions, compareCategories } from "./categorical/compare-categories.js";
export { type ChiSquareTest, type HomogeneityTest, homogeneityTest } from "./categorical/homogeneity-test.js";
export type { NewCategory } from "./categorical/new-categories.js";
export { LEAST_EXPECTED, poolRare } from "./categorical/pool-rare.js";
export { type TotalVariation, totalVariation } from "./categorical/total-variation.js";
export { type UnseenEvents, type UnseenEventsInput, unseenEvents } from "./categorical/unseen-events.js";
export type { VanishedCategory } from "./categorical/vanished-categories.js";
export { cdfOf } from "./cdf-of.js";
export type { CdfView } from "./cdf-view.js";
export { clopperPearson } from "./clopper-pearson.js";
export { type CompareOptions, compareNumeric } from "./compare-numeric.js";
export { type BinCount, decileBins } from "./decile-bins.js";
export { compareVerdict, type Verdict } from "./decision/compare-verdict.js";
export { type Decision, type DecisionGround, decide, type JudgedWindow } from "./decision/decide.js";
export type { DecisionMemory } from "./decision/decision-memory.js";
export { criticalZ, DEFAULT_DECISION_RULE, type DecisionRule } from "./decision/decision-rule.js";
export { decisionSentence } from "./decision/decision-sentence.js";
export type { DriftPlace } from "./decision/drift-place.js";
export type { Evidence } from "./decision/evidence.js";
export { NO_REPLAY, type Replay, replayBaseline } from "./decision/replay.js";
export { type SideCounts, sideCounts } from "./decision/side-counts.js";
export { type Why, whyOf } from "./decision/why.js";
export { countWindow, windowCounts } from "./decision/window-counts.js";
export { type DesignEffect, designEffectAt } from "./design-effect.js";
export { BAND_CRITICAL, type BandConfidence, type ShareRange, shareRange } from "./deviance-band.js";
export { effectiveEvents } from "./effective-events.js";
export { type EventsAt, eventsAt } from "./events-at.js";
export { freezeThresholds, type Threshold } from "./freeze-thresholds.js";
export { FROZEN_RANKS, GRID_RANKS } from "./grid-ranks.js";
export { betaQuantile, incompleteBeta } from "./incomplete-beta.js";
export { type KsDistance, ksDistance } from "./ks-distance.js";
export { type KsPValueInput, kolmogorovTail, ksPValue, ksPValueAsymptotic } from "./ks-p-value.js";
export { ksPValueExact } from "./ks-p-value-exact.js";
export {
  adjustBenjaminiHochberg,
  adjustBenjaminiYekutieli,
} from "./multiplicity/adjusted-p-values.js";
export {
  type ChanceLevel,
  type ChanceLevelInput,
  jensenShannonNoise,
  populationStabilityNoise,
} from "./noise/chance-level.js";
export { type WassersteinChange, wassersteinChange } from "./noise/wasserstein-change.js";
export { type WassersteinChangeOptions, wassersteinError } from "./noise/wasserstein-error.js";
export { TAIL_RANGES, type WassersteinNoiseInput, wassersteinNoise } from "./noise/wasserstein-noise.js";
export type { BothSides, ComparedNumeric, NumericComparison, ThinNumeric } from "./numeric-comparison.js";
export { type NumericSide, numericSideOf, type ThresholdCounts } from "./numeric-side.js";
export {
  type BreakPoint,
  findBreak,
  findOnset,
  type Onset,
  type OnsetAnswer,
  type OnsetInput,
  type OnsetWindow,
} from "./onset/find-onset.js";
export { jensenShannonDistance, populationStabilityIndex } from "./population-stability.js";
export { quantileOf } from "./quantile-of.js";
export { type QuantilePair, type QuantilePairsOptions, quantilePairs } from "./quantile-pairs.js";
export { type Alternative, binomialPValue } from "./rates/binomial-p-value.js";
export { garwood, poissonTail } from "./rates/garwood.js";
export { type RateChange, type RateChangeOptions, type RateCounts, rateChange } from "./rates/rate-change.js";
export { rateChangePValue } from "./rates/rate-change-p-value.js";
export { wilson } from "./rates/wilson.js";
export { PATTERN_KINDS, type PatternKind } from "./reading/pattern.js";
export { type Reading, type ReadingOptions, readPattern } from "./reading/read-pattern.js";
export { blindRanks } from "./sensitivity/blind-ranks.js";
export type { ChangeName } from "./sensitivity/changes.js";
export {
  type Sensitivity,
  type SensitivityInput,
  sensitivityOf,
  type VisibleChange,
} from "./sensitivity/sensitivity.js";
export { type ShiftPoint, shiftFunction } from "./shift-function/shift-function.js";
export { signedRootDeviance } from "./signed-root-deviance.js";
export {
  type SliceAnswer,
  type SliceContribution,
  type SliceOptions,
  sliceContributions,
} from "./slices/slice-contributions.js";
export {
  type DistanceSplit,
  type SlicePart,
  type SliceSides,
  splitDistance,
} from "./slices/split-distance.js";
export { type ExceedanceSplit, splitExceedance } from "./slices/split-exceedance.js";
export { chiSquareExceededBy, chiSquareTail } from "./special/chi-square.js";
export {
  type GammaTails,
  gammaQuantile,
  gammaTails,
  gammaUpperQuantile,
} from "./special/incomplete-gamma.js";
export { normalExceededBy, normalTail, normalTwoSided } from "./special/normal.js";
export type { BlockCounts } from "./sway/block-counts.js";
export { learnSway, type Sway } from "./sway/learn-sway.js";
export { Tolerance, type ToleranceBasis, type ToleranceInput } from "./sway/tolerance.js";
export type { WatchedCounts } from "./sway/watched-counts.js";
export { type CdfSweep, sweepCdfs } from "./sweep-cdfs.js";
export {
  TAIL_RANKS,
  type TailDivergence,
  type TailDivergenceOptions,
  tailDivergence,
} from "./tail-divergence/tail-divergence.js";
export { type TailExceedance, type TailExceedanceInput, tailExceedance } from "./tail-exceedance.js";
export { type ThresholdShare, thresholdShares } from "./threshold-shares.js";
export { wassersteinScale } from "./wasserstein-scale.js";
export { type RankRange, wasserstein1 } from "./wasserstein1.js";
