/** The sum of values in four lanes, as src/kernel/sum-values.ts adds them. */
export function sumValues(values: usize, count: i32): f64 {
  let a: f64 = 0;
  let b: f64 = 0;
  let c: f64 = 0;
  let d: f64 = 0;
  const end = values + ((<usize>count) << 3);
  const fours = values + ((<usize>(count & ~3)) << 3);
  let at = values;
  for (; at < fours; at += 32) {
    a += load<f64>(at);
    b += load<f64>(at, 8);
    c += load<f64>(at, 16);
    d += load<f64>(at, 24);
  }
  for (; at < end; at += 8) a += load<f64>(at);
  return a + b + (c + d);
}
