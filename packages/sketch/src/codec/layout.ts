/** Where things stand in an encoded sketch: the only file that knows. The page is docs/sketch-format.md. */
export const MAGIC = [0x4d, 0x4c, 0x53, 0x4b] as const; // "MLSK"
export const VERSION = 1;
export const VERSION_AT = 4;
export const FLAGS_AT = 5;
export const COMPRESSION_AT = 6;
export const LENGTH_AT = 8;
export const CHECKSUM_AT = 12;
export const HEADER_BYTES = 16;

export const FLAG_COMPRESSED = 1;
export const FLAG_DESCENDING = 2;
export const FLAG_THRESHOLDS = 4;
export const ALL_FLAGS = FLAG_COMPRESSED | FLAG_DESCENDING | FLAG_THRESHOLDS;
