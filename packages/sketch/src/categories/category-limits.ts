/** Categories that a sketch keeps beside the known ones unless told otherwise. */
export const DEFAULT_CATEGORY_LIMIT = 1_000;
/** Most categories that it can be told to keep, and most that can be known. */
export const MOST_CATEGORIES = 50_000;
