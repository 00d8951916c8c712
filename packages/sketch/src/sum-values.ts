import type { Kernel } from "./kernel/kernel.js";

/** Adds kernel.values[0, count). A sum beyond the range of numbers stays at ±MAX_VALUE: it is never infinite or NaN. */
export function addToSum(sum: number, kernel: Kernel, count: number): number {
  const total = sum + kernel.sumValues(count);
  return Number.isFinite(total) ? total : saturatedSum(sum, kernel.values, count);
}

/** Small enough that no sum of scaled values overflows. */
const DOWN = 2 ** -64;

function saturatedSum(sum: number, values: Float64Array, count: number): number {
  let scaled = sum * DOWN;
  for (let i = 0; i < count; i++) scaled += values[i]! * DOWN;
  return Math.min(Number.MAX_VALUE, Math.max(-Number.MAX_VALUE, scaled / DOWN));
}
