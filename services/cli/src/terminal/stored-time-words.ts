import type { StreamConfig } from "@moorline/config";
import type { Store } from "@moorline/store";
import type { TimeWords } from "./time-point.js";

/** What `first` and `last` mean for a stream: the start of its first and the end of its last stored pane. */
export async function storedTimeWords(store: Store, stream: StreamConfig, nowMs: number): Promise<TimeWords> {
  const extent = await store.panes.extent(stream.name);
  if (extent === null) return { firstMs: nowMs, lastMs: nowMs, nowMs };
  return { firstMs: extent.firstPaneMs, lastMs: extent.lastPaneMs + stream.paneMs, nowMs };
}
