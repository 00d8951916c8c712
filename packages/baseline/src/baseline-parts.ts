/** `BaselinePart.block` of the whole: an encoded sketch. */
export const WHOLE = -1;

/** `BaselinePart.block` of the counts by block (docs/block-counts-format.md). */
export const BLOCK_COUNTS = -2;
