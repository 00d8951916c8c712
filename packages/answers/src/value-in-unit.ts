import { FROZEN_RANKS } from "@moorline/stats";

/** `p99 (7.25 °C)`: a frozen rank with the baseline's value there. */
export function valueInUnit(thresholds: readonly number[], rank: number, unit: string | null): string {
  const value = Number(thresholds[FROZEN_RANKS.indexOf(rank)]!.toPrecision(4));
  return `p${Number((rank * 100).toPrecision(6))} (${value}${unit === null ? "" : ` ${unit}`})`;
}
