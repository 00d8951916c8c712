/** Adds up values in four lanes. A sum beyond the range of numbers stays at ±MAX_VALUE: it is never infinite or NaN. */
export function addToSum(sum: number, values: Float64Array, count: number): number {
  let a = 0;
  let b = 0;
  let c = 0;
  let d = 0;
  let i = 0;
  for (; i + 3 < count; i += 4) {
    a += values[i]!;
    b += values[i + 1]!;
    c += values[i + 2]!;
    d += values[i + 3]!;
  }
  for (; i < count; i++) a += values[i]!;
  const total = sum + (a + b + (c + d));
  return Number.isFinite(total) ? total : saturatedSum(sum, values, count);
}

/** Small enough that no sum of scaled values overflows. */
const DOWN = 2 ** -64;

function saturatedSum(sum: number, values: Float64Array, count: number): number {
  let scaled = sum * DOWN;
  for (let i = 0; i < count; i++) scaled += values[i]! * DOWN;
  return Math.min(Number.MAX_VALUE, Math.max(-Number.MAX_VALUE, scaled / DOWN));
}
