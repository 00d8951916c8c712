/** Records of a batch, ascending by offset, looked at one by one: most offsets and times are never asked for. */
export interface SourceRecords {
  readonly length: number;
  offsetAt(index: number): number;
  /** May be a view of a larger buffer: copy what is kept. */
  valueAt(index: number): Uint8Array | null;
  timestampMsAt(index: number): number | null;
}

/** What a source read of one partition at once. */
export interface SourceBatch {
  readonly topic: string;
  readonly partition: number;
  /** Where the read began: nothing between here and the first record is to be had. */
  readonly fromOffset: number;
  /** The offset after the last one read. */
  readonly toOffset: number;
  /** The offset that the next record of the partition will get: Kafka's high watermark, a file's length. */
  readonly endOffset: number;
  readonly records: SourceRecords;
}

/** A partition that a source may now read. */
export interface PartitionOpening {
  readonly topic: string;
  readonly partition: number;
  /** Where it starts when the store does not know it. */
  readonly startOffset: number;
  /** The first offset that is still to be had, and the one after the last. */
  readonly lowOffset: number;
  readonly endOffset: number;
  /** What the partition lies in: cluster id, head of the file. */
  readonly sourceId: string;
  /** Whether the source that the store knows is this one, if that is more than equality. */
  readonly isSameSource?: (storedId: string) => Promise<boolean>;
}

/** What a source lends while one batch is worked on. */
export interface BatchControl {
  /** Keeps ownership; throws when it is lost, and then the batch must be left as it is. */
  heartbeat(): Promise<void>;
  /** The first offset that is still to be had. */
  lowOffset(): Promise<number>;
}

/** What the source must do next with a partition. */
export type Verdict =
  | { readonly action: "read-on" }
  /** Read from this offset. */
  | { readonly action: "seek"; readonly offset: number }
  /** Leave it alone until the next start: an operator has to decide. */
  | { readonly action: "halt"; readonly reason: string }
  /** Another collector has it: wait a heartbeat, find out who owns what, open it again if it is still ours. */
  | { readonly action: "fenced" }
  /** The batch is of an older assignment, or the collector stops: forget it. */
  | { readonly action: "drop" };

/** Where a source delivers. The same for every kind of source: claims, guard, checkpoints and fence are behind it. */
export interface SourceSink {
  /** Claims a partition; answers `seek`, `halt` or `drop`. */
  open(opening: PartitionOpening): Promise<Verdict>;
  take(batch: SourceBatch, control: BatchControl): Promise<Verdict>;
  /** Writes what was counted so far, of all partitions. */
  flush(): Promise<void>;
  /** Ownership is lost or unsure: forgets what was counted since the last checkpoints; the store has the rest. */
  releaseAll(): void;
  /** The last record of a finished partition has been taken. */
  finish(topic: string, partition: number): Promise<void>;
  /** Where the log ends now, for the lag metric between batches. */
  reportEnd(topic: string, partition: number, endOffset: number): void;
}

/** A feed of partitions: Kafka topics or files. */
export interface Source {
  start(sink: SourceSink): Promise<void>;
  /** No more deliveries; what the sink works on is finished or dropped. Does not give ownership back. */
  quiesce(): Promise<void>;
  /** Gives ownership back and lets go of connections. */
  close(): Promise<void>;
  /** The store has everything below `nextOffset`. A courtesy for tools that watch the source; never fails. */
  committed(topic: string, partition: number, nextOffset: number): void;
  /** Resolves when every partition is finished; rejects when the source cannot go on. */
  readonly ended: Promise<void>;
}
