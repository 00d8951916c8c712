/** The sum of values[0, count) in four lanes: a fixed order, so that both kernels give the same bits. */
export function sumValues(values: Float64Array, count: number): number {
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
  return a + b + (c + d);
}
