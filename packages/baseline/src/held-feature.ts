import {
  type BlockCounts,
  type DecisionGround,
  type DecisionRule,
  FROZEN_RANKS,
  learnSway,
  NO_REPLAY,
  type NumericSide,
  type Replay,
  replayBaseline,
  type SideCounts,
  type Sway,
  sideCounts,
  Tolerance,
  type ToleranceBasis,
} from "@moorline/stats";
import type { BaselinePart } from "@moorline/store";
import { decodeBlockCounts } from "./block-counts-codec.js";
import { sideOfPart } from "./part-side.js";

/** What dependence between events does to a comparison. */
export interface Dependence {
  /** What it was learnt from; `assumed`: nothing, events are taken as independent. */
  readonly basis: ToleranceBasis;
  readonly designEffect: (rank: number) => number;
}

/** Index of the frozen rank that lies nearest, on the scale on which tails are told apart. */
function nearestFrozen(rank: number): number {
  const logit = (p: number) => Math.log(p / (1 - p));
  const at = logit(Math.min(1 - 1e-6, Math.max(1e-6, rank)));
  let best = 0;
  for (const [index, frozen] of FROZEN_RANKS.entries())
    if (Math.abs(logit(frozen) - at) < Math.abs(logit(FROZEN_RANKS[best]!) - at)) best = index;
  return best;
}

/** One feature and slice of a baseline, as windows are held against it: the whole, and how it varies from block to block. */
export class HeldFeature {
  readonly side: NumericSide;
  readonly counts: SideCounts;
  /** Encoded, for they are read only when something speaks for drift. */
  readonly #blocks: Uint8Array | null;
  #sway: Sway | null | undefined;
  readonly #tolerances = new Map<number, Tolerance>();
  readonly #replays = new Map<string, Replay>();

  /** `blocks` is the part of the same slice and feature that holds counts by block; null where the baseline has none. */
  constructor(whole: BaselinePart, blocks: BaselinePart | null, baselineId: string) {
    this.side = sideOfPart(whole, baselineId);
    this.counts = sideCounts(this.side);
    this.#blocks = blocks === null ? null : blocks.body;
  }

  /** How far the baseline's own blocks wander; null where there are too few. */
  get sway(): Sway | null {
    if (this.#sway === undefined) {
      const blocks = this.#decoded();
      this.#sway = blocks === null ? null : learnSway(blocks);
    }
    return this.#sway;
  }

  tolerance(windowMs: number): Tolerance {
    const known = this.#tolerances.get(windowMs);
    if (known !== undefined) return known;
    const made = new Tolerance({ baseline: this.counts, sway: this.sway, windowMs });
    this.#tolerances.set(windowMs, made);
    return made;
  }

  /** What windows of one horizon are decided on. */
  ground(windowMs: number, rule: DecisionRule): DecisionGround {
    const tolerance = this.tolerance(windowMs);
    return {
      tolerance,
      rule,
      replay: () => this.#replay(tolerance, rule),
      thresholds: this.counts.thresholds,
    };
  }

  /**
   * By how much dependence inflates the variance of a share of so many values that lie in a range of so long a time, by rank; held against the whole
   * baseline, not against its hours.
   */
  dependence(rangeMs: number, values: number): Dependence {
    const { sway } = this;
    const plain = sway === null ? null : { ...sway, seasonal: null };
    const tolerance = new Tolerance({ baseline: this.counts, sway: plain, windowMs: rangeMs });
    const at = (rank: number) => tolerance.designEffect(nearestFrozen(rank), 1, values);
    return { basis: tolerance.basis, designEffect: at };
  }

  #replay(tolerance: Tolerance, rule: DecisionRule): Replay {
    const key = `${tolerance.windowMs} ${rule.persistence}`;
    const known = this.#replays.get(key);
    if (known !== undefined) return known;
    const blocks = tolerance.basis === "assumed" ? null : this.#decoded();
    const made = blocks === null ? NO_REPLAY : replayBaseline(blocks, tolerance, rule);
    this.#replays.set(key, made);
    return made;
  }

  #decoded(): BlockCounts | null {
    if (this.#blocks === null) return null;
    const blocks = decodeBlockCounts(this.#blocks);
    // A feature that had no finite value was counted without thresholds.
    return blocks.atOrBelow.length === this.counts.thresholds.length ? blocks : null;
  }
}
