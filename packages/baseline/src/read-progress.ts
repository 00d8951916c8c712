/** How far a long read is. */
export interface ReadProgress {
  readonly stage: "reading" | "freezing thresholds" | "counting";
  readonly rows: number;
  /** Null while it is not known. */
  readonly totalRows: number | null;
  /** 0 to 1; null while it is not known. */
  readonly done: number | null;
}

export type OnProgress = (progress: ReadProgress) => void;
