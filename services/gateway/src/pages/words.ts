import { numberText } from "@moorline/figures";

/** `2026-12-01 10:31 UTC`. */
export function timeText(iso: string): string {
  return `${iso.slice(0, 10)} ${iso.slice(11, 16)} UTC`;
}

/** `3.4 ×`, or a dash where there is no answer. */
export function ratioText(ratio: number | null): string {
  return ratio === null ? "–" : `${numberText(ratio, 3)} ×`;
}

/** A share as a percentage with sensible digits. */
export function percentText(share: number | null): string {
  return share === null ? "–" : `${numberText(share * 100)} %`;
}
