/** Figures as people read them: few digits, grouped thousands, never NaN (the callers pass finite numbers only). */

/** 0.034 → "3.4 %", 0.1234 → "12.3 %", 0.00012 → "0.012 %". */
export function percentInWords(share: number): string {
  const percent = share * 100;
  if (percent === 0) return "0 %";
  if (Math.abs(percent) < 0.001) return "less than 0.001 %";
  return `${Math.abs(percent) >= 1 ? percent.toFixed(1) : Number(percent.toPrecision(2))} %`;
}

/** 12000 → "12,000". */
export function countInWords(count: number): string {
  return Math.round(count).toLocaleString("en-US");
}

/** Four significant digits, in plain notation from 0.0001 to 999,999,999. */
export function valueInWords(value: number): string {
  const size = Math.abs(value);
  if (value !== 0 && (size < 1e-4 || size >= 1e9)) return value.toExponential(3);
  if (size >= 1000) return value.toLocaleString("en-US", { maximumFractionDigits: size >= 1e4 ? 0 : 1 });
  return String(Number(value.toPrecision(4)));
}

/** 3.42 → "3.4 times", 0.31 → "0.31 times", 5200 → "5,200 times". */
export function timesInWords(ratio: number): string {
  if (ratio >= 100) return `${countInWords(ratio)} times`;
  return `${ratio >= 1 ? ratio.toFixed(1) : Number(ratio.toPrecision(2))} times`;
}

/** 0.99 → "p99", 0.001 → "p0.1". */
export function rankInWords(rank: number): string {
  return `p${Number((rank * 100).toPrecision(6))}`;
}
