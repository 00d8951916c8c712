import { findBaseline } from "@moorline/baseline";
import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";

/**
 * Id of the baseline that a person means: the one that the text begins, or the active one.
 *
 * @throws MOORLINE_STATE_BASELINE_NOT_ACTIVE when none is named and none is active
 */
export async function activeBaselineId(
  store: Store,
  stream: StreamConfig,
  named: string | null,
): Promise<string> {
  if (named !== null) return (await findBaseline(store, stream.name, named)).id;
  const active = await store.baselines.active(stream.name);
  if (active !== null) return active.baselineId;
  throw new MoorlineError("MOORLINE_STATE_BASELINE_NOT_ACTIVE", { stream: stream.name });
}
