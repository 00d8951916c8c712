/** What the paced producer's events must amount to, worked out from their index alone. */
export interface ProducedEvents {
  readonly events: number;
  readonly partitions: number;
  readonly baseMs: number;
  readonly stepMs: number;
  readonly paneMs: number;
}

export interface ExpectedPane {
  readonly paneStartMs: number;
  readonly slice: string;
  readonly events: number;
  readonly doorsMissing: number;
  readonly tempSum: number;
}

const DEPOTS = ["north", "south", "east"] as const;

/** One row a pane and slice, by brute force over every event. */
export function expectedPanes(produced: ProducedEvents): readonly ExpectedPane[] {
  const rows = new Map<
    string,
    { paneStartMs: number; slice: string; events: number; doorsMissing: number; tempSum: number }
  >();
  for (let i = 0; i < produced.events; i++) {
    const eventMs = produced.baseMs + i * produced.stepMs;
    const paneStartMs = Math.floor(eventMs / produced.paneMs) * produced.paneMs;
    for (const slice of ["all", `depot=${DEPOTS[i % 3]}`]) {
      const key = `${paneStartMs} ${slice}`;
      const row = rows.get(key) ?? { paneStartMs, slice, events: 0, doorsMissing: 0, tempSum: 0 };
      row.events += 1;
      row.doorsMissing += i % 10 === 0 ? 1 : 0;
      row.tempSum += ((i * 7919) % 1000) / 100;
      rows.set(key, row);
    }
  }
  return [...rows.values()];
}
