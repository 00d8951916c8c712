/** How many events of each kind a sketch has seen. `events` is the sum of the others: nothing is dropped uncounted. */
export interface KindCounts {
  readonly events: number;
  readonly finite: number;
  readonly missing: number;
  readonly nan: number;
  readonly positiveInfinity: number;
  readonly negativeInfinity: number;
}
