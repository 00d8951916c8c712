import { type HeldFeature, loadHeldFeature, streamRule } from "@moorline/baseline";
import type { FeatureConfig, StreamConfig } from "@moorline/config";
import {
  blindRanks,
  type DecisionGround,
  type Sensitivity,
  sensitivityOf,
  type ToleranceBasis,
} from "@moorline/stats";
import type { Store } from "@moorline/store";
import { activeBaselineId } from "./active-baseline.js";

export interface SensitivityRequest {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly features: readonly FeatureConfig[];
  readonly slice: string;
  /** Events of one window of the shortest horizon; null: as many as came last. */
  readonly eventsPerWindow: number | null;
  /** Id of a baseline, or the start of one; null: the active one. */
  readonly baseline: string | null;
}

/** What can be seen of one feature at one horizon. */
export interface FeatureSensitivity {
  readonly feature: string;
  readonly unit: string | null;
  readonly horizon: string;
  readonly windowMs: number;
  readonly eventsPerWindow: number;
  readonly eventsFrom: "given" | "stored windows" | "the baseline";
  /** Slice of the baseline that it is held against. */
  readonly baselineSlice: string;
  readonly tolerance: { readonly basis: ToleranceBasis; readonly seasonal: boolean };
  readonly needed: { readonly adrift: number; readonly straining: number };
  readonly changes: readonly Sensitivity[];
  /** Ranks at which too few events are expected, however long windows are pooled: their tail cannot page. */
  readonly blindRanks: readonly number[];
}

export interface SensitivityAnswer {
  readonly stream: string;
  readonly slice: string;
  readonly baseline: { readonly id: string };
  /** Probability with which a change of the told size pages. */
  readonly power: number;
  readonly features: readonly FeatureSensitivity[];
}

const POWER = 0.9;
const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;

/** For each feature and horizon the smallest changes that would page, and how soon. */
export async function readSensitivity(request: SensitivityRequest): Promise<SensitivityAnswer> {
  const { store, stream, slice } = request;
  const id = await activeBaselineId(store, stream, request.baseline);
  const rule = streamRule(stream, (await store.panes.slices(stream.name)).length);
  const features: FeatureSensitivity[] = [];
  for (const { name: feature, unit } of request.features) {
    const { held, slice: baselineSlice } = await loadHeldFeature(store, id, slice, feature);
    const rate = await rateOf(request, held, feature);
    for (const { label: horizon, ms: windowMs } of stream.horizons) {
      const ground = held.ground(windowMs, rule);
      const eventsPerWindow = rate.eventsAMs * windowMs;
      features.push({
        feature,
        unit,
        horizon,
        windowMs,
        eventsPerWindow: Math.round(eventsPerWindow),
        eventsFrom: rate.from,
        baselineSlice,
        tolerance: { basis: ground.tolerance.basis, seasonal: ground.tolerance.isSeasonal },
        needed: { adrift: rule.zPage, straining: rule.zPage - rule.zStrainBelow },
        ...visibleAt(held, ground, eventsPerWindow),
      });
    }
  }
  return { stream: stream.name, slice, baseline: { id }, power: POWER, features };
}

function visibleAt(
  held: HeldFeature,
  ground: DecisionGround,
  eventsPerWindow: number,
): Pick<FeatureSensitivity, "changes" | "blindRanks"> {
  return {
    changes: sensitivityOf({ side: held.side, ground, eventsPerWindow, power: POWER }),
    blindRanks: blindRanks(ground, eventsPerWindow),
  };
}

interface EventRate {
  readonly eventsAMs: number;
  readonly from: FeatureSensitivity["eventsFrom"];
}

async function rateOf(request: SensitivityRequest, held: HeldFeature, feature: string): Promise<EventRate> {
  const { store, stream, slice, eventsPerWindow } = request;
  if (eventsPerWindow !== null) return { eventsAMs: eventsPerWindow / stream.horizons[0]!.ms, from: "given" };
  const extent = await store.panes.extent(stream.name);
  if (extent !== null) {
    const toMs = extent.lastPaneMs;
    const fromMs = Math.max(extent.firstPaneMs, toMs - DAY_MS);
    // The last pane may still be filling.
    if (toMs > fromMs) {
      const rows = await store.panes.rollups({
        stream: stream.name,
        level: "pane",
        fromMs,
        toMs,
        slice,
        feature,
      });
      const events = rows.reduce((sum, row) => sum + row.events, 0);
      if (events > 0) return { eventsAMs: events / (toMs - fromMs), from: "stored windows" };
    }
  }
  const sway = held.sway;
  if (sway?.lengthMs != null)
    return { eventsAMs: held.counts.events / (sway.blocks * sway.lengthMs), from: "the baseline" };
  return { eventsAMs: held.counts.events / DAY_MS, from: "the baseline" };
}
