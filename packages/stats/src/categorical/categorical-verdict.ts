import { effectiveEvents } from "../effective-events.js";
import type { CategoricalComparison, ComparedCategories } from "./categorical-comparison.js";
import { categorySentence, holdingCategories, thinCategories } from "./category-sentence.js";

/** Where and which way a categorical feature moved. */
export interface CategoryPlace {
  readonly part: "new" | "vanished" | "category" | "missing" | "unseen" | "categories";
  /** Null for `missing`, `unseen` and `categories`. */
  readonly category: string | null;
  /** Production's share minus the baseline's; for `categories` the total variation beyond noise, for `unseen` the share beyond the expected one. */
  readonly difference: number;
  /** Probability of such a place by chance, multiplied by the number of places looked at; at most 1. */
  readonly pValue: number;
}

export interface CategoricalVerdict {
  readonly state: "holding" | "straining" | "adrift" | "thin";
  readonly place: CategoryPlace | null;
  readonly sentence: string;
}

/** How large a difference must be to matter, whatever n. Choices, not estimates: docs/categories.md. */
export const CATEGORY_FLOORS = Object.freeze({
  /** One category's share, up or down. */
  share: 0.05,
  /** Share of a category that the baseline never saw, or that is gone. */
  newOrVanished: 0.01,
  /** Share of never-seen categories together, beyond what is expected. */
  unseen: 0.01,
  /** Share of values that lie in other categories than in the baseline, beyond noise. */
  totalVariation: 0.05,
  /** Missing values: difference of fractions … */
  missing: 0.005,
  /** … and relative to the baseline's. */
  missingFactor: 0.5,
  /** Effective events below which nothing is said to hold. */
  minEvents: 50,
  /** Events of the smaller side below which nothing is said at all. */
  fewestEvents: 5,
});

/** Places looked at, each with a quarter of the error: the whole, single categories, unseen ones, missing values. */
const PARTS = 4;
const CLEAR = 0.001;
const LIKELY = 0.05;

interface Candidate {
  readonly place: CategoryPlace;
  readonly floorPassed: boolean;
}

/**
 * What one categorical comparison without a time axis amounts to.
 *
 * Definition  at each place (a new, vanished or known category, missing values, unseen categories together, the whole): is the effect floor passed, and is
 *             it beyond chance at 99.9 % over all places together? Both → adrift; only one → straining, a floor by itself only where chance is ruled out at
 *             95 %; none → holding. Over categories by Bonferroni, over the four kinds of places by a quarter each.
 * Edges       thin when fewer than 50 effective events stand on both sides, unless both conditions hold anyway; fewer than 5 are always thin.
 * Source      docs/categories.md
 */
export function categoricalVerdict(comparison: CategoricalComparison): CategoricalVerdict {
  const { n, events, designEffect } = comparison;
  const thin = { state: "thin", place: null, sentence: thinCategories(comparison) } as const;
  if (Math.min(events.baseline, events.production) < CATEGORY_FLOORS.fewestEvents) return thin;
  const candidates = candidatesOf(comparison).sort(furthestFirst);
  const clear = ({ place }: Candidate) => place.pValue <= CLEAR;
  const adrift = candidates.find((candidate) => candidate.floorPassed && clear(candidate));
  if (adrift) return verdictAt("adrift", adrift, comparison);
  if (effectiveEvents(n.baseline, n.production, designEffect) < CATEGORY_FLOORS.minEvents) return thin;
  const straining = candidates.find(
    (candidate) => clear(candidate) || (candidate.floorPassed && candidate.place.pValue <= LIKELY),
  );
  if (straining) return verdictAt("straining", straining, comparison);
  return { state: "holding", place: null, sentence: holdingCategories(comparison) };
}

function verdictAt(
  state: "adrift" | "straining",
  { place }: Candidate,
  comparison: CategoricalComparison,
): CategoricalVerdict {
  return { state, place, sentence: categorySentence(place, comparison) };
}

/** A place with a name tells more than one without; among equals the larger difference. */
function furthestFirst(a: Candidate, b: Candidate): number {
  const rank = ({ place }: Candidate) => (place.part === "categories" ? 2 : place.part === "unseen" ? 1 : 0);
  return rank(a) - rank(b) || Math.abs(b.place.difference) - Math.abs(a.place.difference);
}

function candidatesOf(comparison: CategoricalComparison): Candidate[] {
  const candidates = missingCandidate(comparison);
  if (comparison.thin) return candidates;
  return [
    ...candidates,
    ...moverCandidates(comparison),
    ...unseenCandidate(comparison),
    wholeCandidate(comparison),
  ];
}

function candidate(place: Omit<CategoryPlace, "pValue">, pValue: number, floorPassed: boolean): Candidate {
  return { place: { ...place, pValue: Math.min(1, pValue) }, floorPassed };
}

function missingCandidate({ missingChange }: CategoricalComparison): Candidate[] {
  if (missingChange === null) return [];
  const { difference, baseline, pValue } = missingChange;
  const floor = Math.max(CATEGORY_FLOORS.missing, CATEGORY_FLOORS.missingFactor * baseline);
  const place = { part: "missing", category: null, difference } as const;
  return [candidate(place, PARTS * pValue, Math.abs(difference) >= floor)];
}

function moverCandidates({ movers, vanished, unseen }: ComparedCategories): Candidate[] {
  const gone = new Set(vanished.map(({ category }) => category));
  return movers.map(({ category, baseline, difference, pValue }) => {
    // Without `unseen` the baseline has categories that are not kept, and none can be called new.
    const part = baseline === 0 && unseen !== null ? "new" : gone.has(category) ? "vanished" : "category";
    const floor = part === "category" ? CATEGORY_FLOORS.share : CATEGORY_FLOORS.newOrVanished;
    return candidate(
      { part, category, difference },
      PARTS * movers.length * pValue,
      Math.abs(difference) >= floor,
    );
  });
}

function unseenCandidate({ unseen, n }: ComparedCategories): Candidate[] {
  if (unseen === null) return [];
  const difference = unseen.share - unseen.expected / n.production;
  const place = { part: "unseen", category: null, difference } as const;
  return [candidate(place, PARTS * unseen.pValue, difference >= CATEGORY_FLOORS.unseen)];
}

/** By Pearson's statistic: its size is nearer to the nominal one than G's (docs/categories.md). */
function wholeCandidate({ totalVariation, chiSquare }: ComparedCategories): Candidate {
  const difference = totalVariation.beyondNoise;
  const place = { part: "categories", category: null, difference } as const;
  return candidate(place, PARTS * chiSquare.pValue, difference >= CATEGORY_FLOORS.totalVariation);
}
