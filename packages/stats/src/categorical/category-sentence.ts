import { countInWords, percentInWords } from "../figures-in-words.js";
import type { CategoricalComparison } from "./categorical-comparison.js";
import type { CategoryPlace } from "./categorical-verdict.js";
import { categoryInWords } from "./category-in-words.js";

/**
 * What a place shows, in words with its figures.
 *
 * For example: new category "north-2": 3.2 % of values, none in the baseline's 40,000; n = 12,000
 */
export function categorySentence(place: CategoryPlace, comparison: CategoricalComparison): string {
  // Missing values are a share of everything that came, the others of what has a value.
  const of = place.part === "missing" ? comparison.events : comparison.n;
  return `${placeInWords(place, comparison)}; n = ${countInWords(of.production)}`;
}

function placeInWords(
  { part, category, difference }: CategoryPlace,
  comparison: CategoricalComparison,
): string {
  const before = countInWords(comparison.n.baseline);
  const name = category === null ? "" : categoryInWords(category);
  const mover = comparison.movers.find((candidate) => candidate.category === category);
  const [now, then] = [percentInWords(mover?.production ?? 0), percentInWords(mover?.baseline ?? 0)];
  switch (part) {
    case "new":
      return `new category ${name}: ${now} of values, none in the baseline's ${before}`;
    case "vanished":
      return `category ${name} is gone: no value has it, ${then} of the baseline's had`;
    case "category":
      return `${difference > 0 ? "more" : "less"} of category ${name}: ${now} of values, the baseline has ${then}`;
    case "missing":
      return missingInWords(comparison);
    case "unseen":
      return unseenInWords(comparison);
    case "categories":
      return wholeInWords(comparison);
  }
}

function missingInWords({ missingChange }: CategoricalComparison): string {
  const { production, baseline } = missingChange!;
  const which = production > baseline ? "more" : "fewer";
  return `${which} missing values: ${percentInWords(production)} of events carry no value, the baseline has ${percentInWords(baseline)}`;
}

function unseenInWords({ unseen, n }: CategoricalComparison): string {
  const expected = percentInWords(unseen!.expected / n.production);
  return `values that the baseline never had: ${percentInWords(unseen!.share)} of them, ${expected} were to be expected`;
}

function wholeInWords({ totalVariation }: CategoricalComparison): string {
  const { distance, noise } = totalVariation!;
  return `categories shared out differently: ${percentInWords(distance)} of values lie in other categories than in the baseline, chance alone makes ${percentInWords(noise)}`;
}

/** Why a comparison is too thin, in words. */
export function thinCategories({ n, reason }: CategoricalComparison): string {
  if (reason !== null) return `too few values to tell: ${reason}`;
  return `too few values to tell: n = ${countInWords(n.production)} against ${countInWords(n.baseline)} in the baseline`;
}

/** That nothing is beyond tolerance, in words. */
export function holdingCategories({ n }: CategoricalComparison): string {
  return `every category within tolerance; n = ${countInWords(n.production)} against ${countInWords(n.baseline)} in the baseline`;
}
