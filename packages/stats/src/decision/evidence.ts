import { FROZEN_RANKS, partOfRank } from "../grid-ranks.js";
import { signedRootDeviance } from "../signed-root-deviance.js";
import type { Tolerance } from "../sway/tolerance.js";
import { BELOW_LOWEST, MISSING, WATCHED } from "../sway/watched-counts.js";
import type { DecisionRule } from "./decision-rule.js";
import { isFarAtOnce, passesFloor, type SharePair, type WatchedPart } from "./floors.js";
import { type BlockSums, COLUMN } from "./window-history.js";

/** What speaks for drift at one watched share and scale. Plain JSON. */
export interface Evidence {
  /** Index of the watched share. */
  readonly share: number;
  /** Windows of one block; the pool has `persistence` blocks. 1 with `blocks` 1: this window alone. */
  readonly scale: number;
  readonly blocks: number;
  readonly observed: number;
  readonly expected: number;
  /** Events that the observed share is of. */
  readonly events: number;
  /** Effective events, dependence and the baseline's own error taken off. */
  readonly effective: number;
  /** Of the pool; positive: more values at or below the threshold than expected (or more missing). */
  readonly z: number;
}

/** Rank of each watched share; null for missing. */
export const SHARE_RANKS: readonly (number | null)[] = [...FROZEN_RANKS, null, FROZEN_RANKS[0]!];
const PARTS: readonly WatchedPart[] = [...FROZEN_RANKS.map(partOfRank), "missing", "lower tail"];

export function partOfShare(share: number): WatchedPart {
  return PARTS[share]!;
}

/** How the blocks of one scale are looked at. */
export interface Look {
  readonly sums: BlockSums;
  /** Windows of one block. */
  readonly scale: number;
  readonly tolerance: Tolerance;
  readonly rule: DecisionRule;
  /** Least |z| that is of interest. */
  readonly least: number;
  /** Whether a difference too small to matter is left out. */
  readonly floored: boolean;
}

/**
 * The watched shares whose blocks are all off the same way.
 *
 * Definition  pool of the blocks: the effect floor is passed, M·min(e, 1 − e) ≥ minExpected, |z| ≥ least; and each block by itself has |z| ≥ zBlock in
 *             the pool's direction.
 */
export function sustainedEvidence(look: Look): Evidence[] {
  const found: Evidence[] = [];
  for (let share = 0; share < WATCHED; share += 1) {
    const at = evidenceAt(look, share);
    if (at !== null && blocksAgree(look, share, Math.sign(at.z))) found.push(at);
  }
  return found;
}

/** The watched shares that one window alone shows far off: the look is at one block of one window. */
export function singleEvidence(look: Look): Evidence[] {
  const found: Evidence[] = [];
  for (let share = 0; share < WATCHED; share += 1) {
    const at = evidenceAt(look, share);
    if (at !== null) found.push(at);
  }
  return found;
}

/** Is one window enough to be adrift at once? */
export function isAtOnce(evidence: Evidence, rule: DecisionRule): boolean {
  return Math.abs(evidence.z) >= rule.zAtOnce && isFarAtOnce(pairOf(evidence), rule);
}

export function pairOf({ share, observed, expected, events }: Evidence): SharePair {
  return { part: partOfShare(share), observed, expected, events };
}

function evidenceAt(look: Look, share: number): Evidence | null {
  const { sums, scale, tolerance, rule, least, floored } = look;
  const { pool, blocks } = sums;
  const events = totalIn(pool, 0, share);
  if (events <= 0 || !tolerance.watches(share)) return null;
  const observed = Math.min(1, hitsIn(pool, 0, share) / events);
  const expected = expectedIn(pool, 0, share, tolerance);
  if (floored && !passesFloor(PARTS[share]!, observed, expected, events, rule)) return null;
  const windows = scale * blocks;
  if (!tolerance.knows(windows, events, share)) return null;
  const effective = tolerance.effective(share, windows, events);
  if (!isJudgeable(share, effective, observed, expected, rule)) return null;
  const z = signedRootDeviance(observed, expected, effective);
  if (Math.abs(z) < least) return null;
  return { share, scale, blocks, observed, expected, events, effective, z };
}

/**
 * Far from the middle the deviance is no normal deviate any more: something must have been expected on either side; or, where the baseline hardly has
 * anything (no value missing, nothing below its lowest value, next to nothing beside an atom), enough must have come.
 */
function isJudgeable(
  share: number,
  effective: number,
  observed: number,
  expected: number,
  rule: DecisionRule,
): boolean {
  if (effective * Math.min(expected, 1 - expected) >= rule.minExpected) return true;
  if (share === MISSING || share === BELOW_LOWEST) return effective * observed >= rule.unexpectedMinEvents;
  const beside = expected < 0.5 ? observed : 1 - observed;
  return isAtAtom(share, expected) && effective * beside >= rule.unexpectedMinEvents;
}

/** Is the threshold a value that the baseline repeats, so that far more lies at or below it than its rank? */
function isAtAtom(share: number, expected: number): boolean {
  return Math.abs(expected - SHARE_RANKS[share]!) > ATOM_SHARE;
}

const ATOM_SHARE = 0.01;

function blocksAgree({ sums, scale, tolerance, rule }: Look, share: number, direction: number): boolean {
  const { each, blocks, width } = sums;
  for (let at = 0; at < blocks * width; at += width) {
    const events = totalIn(each, at, share);
    if (events <= 0) return false;
    const observed = Math.min(1, hitsIn(each, at, share) / events);
    const effective = tolerance.effective(share, scale, events);
    const z = signedRootDeviance(observed, expectedIn(each, at, share, tolerance), effective);
    if (z * direction < rule.zBlock) return false;
  }
  return true;
}

function totalIn(sums: Float64Array, at: number, share: number): number {
  return sums[at + (share === MISSING ? COLUMN.events : COLUMN.finite)]!;
}

function hitsIn(sums: Float64Array, at: number, share: number): number {
  if (share === BELOW_LOWEST) return sums[at + COLUMN.belowLowest]!;
  return sums[at + (share === MISSING ? COLUMN.missing : COLUMN.hits + share)]!;
}

function expectedIn(sums: Float64Array, at: number, share: number, tolerance: Tolerance): number {
  if (!tolerance.isSeasonal) return tolerance.expected(share, null);
  return sums[at + COLUMN.expected + share]! / totalIn(sums, at, share);
}
