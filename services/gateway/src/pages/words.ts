import { numberText } from "@moorline/figures";

/** `2026-12-01 10:31 UTC`. */
export function timeText(iso: string): string {
  return `${iso.slice(0, 10)} ${iso.slice(11, 16)} UTC`;
}

/** What was decided, without what the pattern of the window amounts to: that stands on the feature's own page. */
export function verdictText(reading: string): string {
  return reading.split(". The window reads: ", 1)[0]!;
}

/** `3.4 ×`, or a dash where there is no answer. */
export function ratioText(ratio: number | null): string {
  return ratio === null ? "–" : `${numberText(ratio, 3)} ×`;
}

/** A share as a percentage with sensible digits. */
export function percentText(share: number | null): string {
  return share === null ? "–" : `${numberText(share * 100)} %`;
}
