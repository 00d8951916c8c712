/** The first i of from, from + stride, … below count with values[i] = values[i − stride]; −1 when there is none. */
export function findRepeat(values: usize, from: i32, count: i32, stride: i32): i32 {
  let before = load<f64>(values + ((<usize>(from - stride)) << 3));
  for (let i = from; i < count; i += stride) {
    const value = load<f64>(values + ((<usize>i) << 3));
    if (value === before) return i;
    before = value;
  }
  return -1;
}

/** The first i ≥ from so that means[i + 1] − means[i] is more than ratio times the `reach` steps before it and after it, or −1. */
export function findGap(means: usize, from: i32, entryCount: i32, reach: i32, ratio: f64): i32 {
  const reachBytes = (<usize>reach) << 3;
  for (let i = max(from, reach); i + reach + 1 < entryCount; i++) {
    const at = means + ((<usize>i) << 3);
    const mean = load<f64>(at);
    const next = load<f64>(at + 8);
    if (!(next - mean > ratio * (mean - load<f64>(at - reachBytes)))) continue;
    if (next - mean > ratio * (load<f64>(at + 8 + reachBytes) - next)) return i;
  }
  return -1;
}
