const SIGN: u64 = 0x8000000000000000;

/** Unsigned order of keys = numeric order of values. */
export function keyOf(bits: u64): u64 {
  return bits ^ (<u64>(<i64>bits >> 63) | SIGN);
}

/** Keys of −MAX_VALUE and MAX_VALUE: outside lie the infinities and every NaN. */
export const LEAST_FINITE_KEY: u64 = 0x0010000000000000;
export const GREATEST_FINITE_KEY: u64 = ~LEAST_FINITE_KEY;

/** Turns the counts of one histogram into byte offsets of elements of 8 bytes. */
export function toOffsets(histogram: usize, buckets: usize): void {
  let sum: u32 = 0;
  for (let i: usize = 0; i < buckets; i++) {
    const at = histogram + (i << 2);
    const count = load<u32>(at);
    store<u32>(at, sum << 3);
    sum += count;
  }
}
