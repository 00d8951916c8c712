/** What moorline.yaml says, with every default filled in. Times are milliseconds. */
export interface MoorlineConfig {
  readonly store: StoreConfig;
  readonly gateway: ListenConfig & { readonly publicUrl: string };
  /** Health and metrics port of a collector that runs as a process of its own. */
  readonly collector: ListenConfig & CollectorConfig;
  /** Health and metrics port of an evaluator that runs as a process of its own. */
  readonly evaluator: ListenConfig & EvaluatorConfig;
  readonly streams: readonly StreamConfig[];
}

export type StoreConfig =
  | { readonly kind: "sqlite"; readonly path: string }
  | { readonly kind: "postgres"; readonly url: string };

export interface ListenConfig {
  readonly host: string;
  readonly port: number;
}

export interface CollectorConfig {
  /** Longest time between two checkpoints of a partition. Default 5 s. */
  readonly checkpointMs: number;
  /** Events of a partition after which a checkpoint is due at once. Default 200,000. */
  readonly checkpointEvents: number;
  /** Bytes of sketches held, over all partitions, after which checkpoints are due at once. Default 256 MiB. */
  readonly checkpointBytes: number;
}

export interface EvaluatorConfig {
  /** How often closed panes are looked for. Default 1 s. */
  readonly tickMs: number;
}

/** One model's feed of feature events. */
export interface StreamConfig {
  readonly name: string;
  readonly source: SourceConfig;
  readonly payload: PayloadConfig;
  readonly slices: readonly SliceKeyConfig[];
  /** Most values of one slice key; the rest is counted under `other`. Default 50. */
  readonly sliceLimit: number;
  readonly features: readonly FeatureConfig[];
  /** Length of a pane. Default 1 min. */
  readonly paneMs: number;
  /** Whole numbers of panes, ascending. Default 5 min, 1 h, 24 h. */
  readonly horizons: readonly HorizonConfig[];
  /** How long after a pane's end its events may still come and count as on time. Default 2 min. */
  readonly latenessMs: number;
  /** Wall-clock time without an event after which a partition no longer holds the watermark back. Default 5 min. */
  readonly idleAfterMs: number;
  /** Wall-clock time without an event of the whole stream after which its features are `silent`. Default 10 min. */
  readonly silentAfterMs: number;
  /** Event times further ahead of the wall clock than this are dead-lettered. Default 1 h. */
  readonly maxAheadMs: number;
  /** Event times older than this before the wall clock are dead-lettered. Default 30 days; `null` takes any time from 1990 on. */
  readonly maxAgeMs: number | null;
  readonly decision: DecisionConfig;
}

export type SourceConfig = KafkaSourceConfig | FileSourceConfig;

export interface KafkaSourceConfig {
  readonly kind: "kafka";
  readonly brokers: readonly string[];
  readonly topics: readonly string[];
  readonly group: string;
  /** Where undecodable events go. Default `<first topic>.dead-letters`; `null` counts them without keeping a copy. */
  readonly deadLetterTopic: string | null;
  /** Where a partition without a stored offset starts. Default `earliest`. */
  readonly start: "earliest" | "latest";
  /** How long after a collector's last heartbeat its partitions are given to another. Default 30 s. */
  readonly sessionTimeoutMs: number;
}

/** NDJSON files; each is one partition, in the order given; an offset is the byte position of a line's start. */
export interface FileSourceConfig {
  readonly kind: "file";
  /** Absolute: a relative path is taken from the folder of the config file. */
  readonly paths: readonly string[];
  /** What partitions are called, in the same order: the paths as the config has them, so that a moved folder keeps its offsets. Absent: the paths. */
  readonly names?: readonly string[];
  /** True: wait for more lines at the end of a file. False: the stream ends there. */
  readonly follow: boolean;
  readonly deadLetterPath: string | null;
}

export interface PayloadConfig {
  readonly format: "json";
  /** Path of the event time in the payload, as segments; `null` takes the record's own timestamp (Kafka). */
  readonly eventTime: readonly string[] | null;
  readonly eventTimeUnit: "iso" | "s" | "ms" | "us" | "ns";
}

export interface SliceKeyConfig {
  readonly key: string;
  readonly path: readonly string[];
}

export interface FeatureConfig {
  readonly name: string;
  readonly kind: "numeric";
  readonly path: readonly string[];
  readonly unit: string | null;
}

export interface HorizonConfig {
  /** As the config has it, for example `5m`; the metric label. */
  readonly label: string;
  readonly ms: number;
}

/** The effect floors and persistence of the decision; defaults are those of the statistics package. */
export interface DecisionConfig {
  readonly persistence: number;
  readonly releaseAfter: number;
  readonly bodyFloor: number;
  readonly tailFactor: number;
}
