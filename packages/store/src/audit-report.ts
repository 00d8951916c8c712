/** What `moorline audit` found. `findings` empty means clean. */
export interface AuditReport {
  readonly clean: boolean;
  readonly streams: readonly AuditedStream[];
  readonly findings: readonly AuditFinding[];
}

export interface AuditedStream {
  readonly stream: string;
  readonly partitions: number;
  readonly checkpoints: number;
  readonly segments: number;
  readonly events: number;
  readonly deadLetters: number;
  readonly gaps: number;
}

export interface AuditFinding {
  /** 1 or 2: the invariant of the design that does not hold. */
  readonly invariant: 1 | 2;
  readonly stream: string;
  /** For example `parcel-features/3` or `pane 2026-01-01T00:00:00Z, all, cargo_temp`. */
  readonly where: string;
  readonly sentence: string;
}
