import { MoorlineError } from "@moorline/errors";
import type { BaselineRecord, Store } from "@moorline/store";

/** Fewest characters of an id that a person may shorten it to. */
const SHORTEST_ID = 4;

/**
 * The baseline of a stream with this id, or with this start of an id.
 *
 * @throws MOORLINE_STATE_BASELINE_UNKNOWN or …_AMBIGUOUS
 */
export async function findBaseline(store: Store, stream: string, id: string): Promise<BaselineRecord> {
  const all = await store.baselines.list(stream);
  const matches = all.filter(
    (record) => record.id === id || (id.length >= SHORTEST_ID && record.id.startsWith(id)),
  );
  if (matches.length === 1) return matches[0]!;
  if (matches.length === 0) throw new MoorlineError("MOORLINE_STATE_BASELINE_UNKNOWN", { id });
  const starts = matches.map((record) => record.id.slice(0, 12));
  throw new MoorlineError("MOORLINE_STATE_BASELINE_AMBIGUOUS", { id, matches: starts });
}
