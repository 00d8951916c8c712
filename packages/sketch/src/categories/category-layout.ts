/** Where things stand in encoded categories: the only file that knows. The page is docs/category-format.md. */
export const MAGIC = [0x4d, 0x4c, 0x43, 0x53] as const; // "MLCS"
export const VERSION = 1;
export const VERSION_AT = 4;
export const RESERVED_AT = 5;
export const LIMIT_AT = 6;
export const LENGTH_AT = 8;
export const CHECKSUM_AT = 12;
export const HEADER_BYTES = 16;
