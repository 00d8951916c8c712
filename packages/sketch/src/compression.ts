/** Working compression δ of a sketch that is not told another: about 270 clusters, 130 when encoded. */
export const DEFAULT_COMPRESSION = 200;
export const LEAST_COMPRESSION = 100;
export const MOST_COMPRESSION = 2000;

/** A sealed (encoded) sketch has this share of its working compression; measured: docs/decisions/two-levels.md. */
export const SEAL_RATIO = 0.5;
