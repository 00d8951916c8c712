/** Longest name that is kept as it is, in UTF-16 code units. */
export const MOST_NAME_LENGTH = 256;
/** What is kept of the beginning of a longer one. */
const KEPT_OF_LONG = 120;

/**
 * The name under which a category is counted: itself, or, when it is longer than 256 code units, its beginning with its length and a hash of
 * the whole. Halves of surrogate pairs, which no encoding can carry, become U+FFFD.
 *
 * Edges   a name of a name is itself. Two long names that share 120 code units, length and 53 bits of hash are one category.
 */
export function categoryName(category: string): string {
  const whole = category.replace(LONE_SURROGATE, "\ufffd");
  if (whole.length <= MOST_NAME_LENGTH) return whole;
  // The cut may fall within a pair: half of it is left out.
  const start = whole.slice(0, KEPT_OF_LONG).replace(LONE_SURROGATE, "");
  return `${start}… (${whole.length} characters, ${categoryHash(whole).toString(16).padStart(14, "0")})`;
}

const LONE_SURROGATE = /\p{Cs}/gu;

/**
 * A hash of 53 bits, evenly spread: two lanes of multiply and xor over the code units (the first is FNV-1a), each finished by the mixer of
 * MurmurHash3. It decides which categories are kept, hence is part of the format: docs/category-format.md.
 */
export function categoryHash(name: string): number {
  let low = 0x811c9dc5;
  let high = 0x9747b28c;
  for (let i = 0; i < name.length; i++) {
    const unit = name.charCodeAt(i);
    low = Math.imul(low ^ unit, 0x01000193);
    high = Math.imul(high ^ unit, 0x5bd1e995);
    high ^= high >>> 15;
  }
  return (mix(high) >>> 11) * 2 ** 32 + (mix(low) >>> 0);
}

/** How many hashes there are: each is a whole number below it. */
export const HASH_RANGE = 2 ** 53;

function mix(lane: number): number {
  let h = lane;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}
