import { MoorlineError } from "@moorline/errors";
import { LEAST_COMPRESSION, MOST_COMPRESSION } from "./compression.js";

/** @throws MOORLINE_INPUT_SKETCH_COMPRESSION when it is no whole number in range */
export function checkCompression(compression: number): number {
  if (Number.isInteger(compression) && compression >= LEAST_COMPRESSION && compression <= MOST_COMPRESSION) {
    return compression;
  }
  const range = { least: LEAST_COMPRESSION, most: MOST_COMPRESSION };
  throw new MoorlineError("MOORLINE_INPUT_SKETCH_COMPRESSION", { compression, ...range });
}

/** @throws MOORLINE_INPUT_SKETCH_COUNT when it is no whole number from 0 to `most` */
export function checkCount(count: number, most: number): void {
  if (!Number.isSafeInteger(count) || count < 0 || count > most) {
    throw new MoorlineError("MOORLINE_INPUT_SKETCH_COUNT", { count, most });
  }
}

/** @throws MOORLINE_INPUT_SKETCH_VALUE when it is NaN */
export function checkValue(value: number): number {
  if (Number.isNaN(value)) throw new MoorlineError("MOORLINE_INPUT_SKETCH_VALUE", { value });
  return value;
}
