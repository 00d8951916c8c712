/** A number with as many digits as a reader can use: four significant ones unless said otherwise, no exponent between 0.001 and 1,000,000. */
export function numberText(value: number, significant = 4): string {
  if (value === 0) return "0";
  const size = Math.abs(value);
  if (size >= 1e6 || size < 1e-3)
    return value
      .toExponential(2)
      .replace("e+", "e")
      .replace(/\.?0+e/, "e");
  const digits = Math.max(0, significant - 1 - Math.floor(Math.log10(size)));
  const text = value.toFixed(Math.min(digits, 6));
  return groupThousands(text.includes(".") ? text.replace(/\.?0+$/, "") : text);
}

/** Whole counts, thousands set apart. */
export function countText(count: number): string {
  return groupThousands(String(Math.round(count)));
}

function groupThousands(text: string): string {
  const [whole, fraction] = text.split(".");
  const grouped = whole!.replace(/\B(?=(\d{3})+$)/g, ",");
  return fraction === undefined ? grouped : `${grouped}.${fraction}`;
}

/** A rank as people say it: p1, p50, p99.9. */
export function rankText(rank: number): string {
  return `p${Number((rank * 100).toPrecision(6))}`;
}
