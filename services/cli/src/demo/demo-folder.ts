import { mkdirSync } from "node:fs";
import { join, resolve } from "node:path";
import { MoorlineError } from "@moorline/errors";

/** Where the demo keeps its files. */
export interface DemoFolder {
  readonly path: string;
  readonly config: string;
  readonly training: string;
  /** One file a partition. */
  readonly feed: readonly string[];
  /** When the feed began: from there on every event follows. */
  readonly origin: string;
}

export const FEED_PARTITIONS = 3;

/** Makes the folder: MOORLINE_DEMO_DIR, else .moorline/demo under the current directory. */
export function openDemoFolder(env: Readonly<Record<string, string | undefined>>): DemoFolder {
  const path = resolve(env["MOORLINE_DEMO_DIR"] || join(".moorline", "demo"));
  try {
    mkdirSync(join(path, "feed"), { recursive: true });
  } catch (cause) {
    const reason = (cause as Error).message;
    throw new MoorlineError("MOORLINE_UPSTREAM_DEMO_FOLDER", { folder: path, reason }, { cause });
  }
  return {
    path,
    config: join(path, "moorline.yaml"),
    training: join(path, "training.csv"),
    feed: Array.from({ length: FEED_PARTITIONS }, (_, partition) =>
      join(path, "feed", `part-${partition}.ndjson`),
    ),
    origin: join(path, "feed", "origin.json"),
  };
}
