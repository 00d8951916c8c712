import type { PairsRequest, TimeRange } from "@moorline/answers";
import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import { featureOf, type GatewayContext } from "../gateway-context.js";

export interface PairsQuery {
  readonly from?: number | undefined;
  readonly to?: number | undefined;
  readonly slice?: string | undefined;
  readonly horizon?: string | undefined;
  readonly baseline?: string | undefined;
  readonly against?: TimeRange | undefined;
}

const HOUR_MS = 3_600_000;

/** Completes a query: without a range it is the last evaluated window of the horizon named, else of the horizon in the worst state. */
export async function pairsRequest(
  context: GatewayContext,
  stream: StreamConfig,
  featureName: string,
  query: PairsQuery,
): Promise<PairsRequest> {
  const feature = featureOf(stream, featureName);
  const slice = query.slice ?? "all";
  return {
    store: context.store,
    stream,
    feature,
    slice,
    range: await rangeOf(context, stream, featureName, slice, query),
    against: query.against ?? null,
    baseline: query.baseline ?? null,
    nowMs: context.nowMs(),
  };
}

async function rangeOf(
  context: GatewayContext,
  stream: StreamConfig,
  feature: string,
  slice: string,
  { from, to, horizon }: PairsQuery,
): Promise<TimeRange> {
  if (from !== undefined && to !== undefined) {
    if (from >= to) throw new MoorlineError("MOORLINE_INPUT_QUERY", { reason: "from must be before to" });
    return { fromMs: from, toMs: to };
  }
  if (from !== undefined || to !== undefined) {
    throw new MoorlineError("MOORLINE_INPUT_QUERY", { reason: "from and to go together" });
  }
  const states = (await context.store.evaluations.states(stream.name)).filter(
    (row) =>
      row.feature === feature && row.slice === slice && (horizon === undefined || row.horizon === horizon),
  );
  const rank = { adrift: 0, straining: 1, holding: 2, thin: 3, silent: 4 } as const;
  const [shown] = states.toSorted((a, b) => rank[a.state] - rank[b.state] || b.windowEndMs - a.windowEndMs);
  const length = stream.horizons.find((one) => one.label === shown?.horizon)?.ms;
  if (shown === undefined || length === undefined || shown.windowEndMs === 0) {
    const nowMs = context.nowMs();
    return { fromMs: nowMs - HOUR_MS, toMs: nowMs };
  }
  return { fromMs: shown.windowEndMs - length, toMs: shown.windowEndMs };
}
