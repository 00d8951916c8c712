import { wilson } from "../rates/wilson.js";
import type { CategoryBin } from "./align-categories.js";

export interface NewCategory {
  readonly category: string;
  readonly count: number;
  /** Of production's values. */
  readonly share: number;
  /** 95 % interval of the share. */
  readonly interval: readonly [low: number, high: number];
}

/** A new category is worth a line from this share and this count on: rarer ones are what `unseenEvents` is for. */
const SHOWN_FROM = { share: 0.001, count: 5 };

/** Categories of production that the baseline never saw, the most frequent first. */
export function newCategories(bins: readonly CategoryBin[], m: number, designEffect = 1): NewCategory[] {
  return bins
    .filter(
      ({ category, baseline, production }) => category !== null && baseline === 0 && isShown(production, m),
    )
    .sort((a, b) => b.production - a.production)
    .map(({ category, production }) => ({
      category: category!,
      count: production,
      share: production / m,
      interval: wilson(production / designEffect, m / designEffect),
    }));
}

function isShown(count: number, m: number): boolean {
  return count >= SHOWN_FROM.count && count >= SHOWN_FROM.share * m;
}
