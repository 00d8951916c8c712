import { incompleteBeta } from "../incomplete-beta.js";
import { requireCounts } from "../rates/wilson.js";

export interface UnseenEvents {
  /** Production's events of categories that the baseline never saw. */
  readonly events: number;
  readonly share: number;
  /** As many were to be expected had nothing changed: m·N₁/n. */
  readonly expected: number;
  /** Probability of so many or more when nothing changed. */
  readonly pValue: number;
}

export interface UnseenEventsInput {
  /** Baseline events with a value, and how many categories came once among them. */
  readonly n: number;
  readonly singletons: number;
  /** Production events with a value, and the counts of each category among them that the baseline never saw. */
  readonly m: number;
  readonly unseen: readonly number[];
  readonly designEffect?: number;
}

/**
 * Are there more events of never-seen categories than a feature with many rare categories always has?
 *
 * Definition  by Good's rule a further event is of an unseen category with probability N₁/n, N₁ the categories that came once: expected m·N₁/n. As N₁
 *             is itself a count, so many of n, p = P(K ≥ U) for K binomial of U + N₁ trials with probability m/(n + m). With n far above m this is the
 *             Poisson tail above the expected number. Events of one category come together: U and N₁ are divided by c = Σ u²/Σ u, u the counts of the
 *             unseen categories, which is 1 when each came once.
 * Shape       n, m > 0; Σ unseen ≤ m.
 * Accuracy    size for a nominal .05 and .001: docs/categories.md. Without c, 50 categories and n = m = 1,000 have .067 and .008.
 * Edges       no unseen event → p 1; no singleton → expected 0, and a single unseen event of m = n has p ½.
 * Source      Good 1953, doi:10.1093/biomet/40.3-4.237.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when there are more unseen events than events
 * @example unseenEvents({ n: 10, singletons: 0, m: 10, unseen: [1] }).pValue // => 0.5
 */
export function unseenEvents({
  n,
  singletons,
  m,
  unseen,
  designEffect = 1,
}: UnseenEventsInput): UnseenEvents {
  const events = unseen.reduce((sum, count) => sum + count, 0);
  requireCounts(events, m);
  const counted = { events, share: events / m, expected: (m / n) * singletons };
  if (events === 0) return { ...counted, pValue: 1 };
  const together = unseen.reduce((sum, count) => sum + count * count, 0) / events;
  const unit = designEffect * together;
  return { ...counted, pValue: incompleteBeta(m / (n + m), events / unit, singletons / unit + 1) };
}
