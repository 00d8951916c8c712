import type { DecisionGround } from "../decision/decide.js";
import type { DecisionRule } from "../decision/decision-rule.js";
import { partOfShare } from "../decision/evidence.js";
import type { WatchedPart } from "../decision/floors.js";
import { shareRange } from "../deviance-band.js";
import { incompleteBeta } from "../incomplete-beta.js";
import { MISSING } from "../sway/watched-counts.js";

export interface PowerInput {
  readonly ground: DecisionGround;
  readonly share: number;
  readonly expected: number;
  /** Share after the change. */
  readonly changed: number;
  /** Windows of one block. */
  readonly scale: number;
  /** Events of a window that the share is of. */
  readonly eventsPerWindow: number;
}

/**
 * Probability that the sustained rule fires at one share and scale once its blocks lie wholly in the changed time; a lower bound.
 *
 * Definition  the pool must pass the floor and |z| ≥ H, each block |z| ≥ zBlock: each of these asks for a count that is exceeded with the binomial
 *             probability of the effective events. The bound multiplies them, for they are positively dependent.
 * Accuracy    against simulation through `decide`: docs/sensitivity.md.
 */
export function sustainedPower(input: PowerInput): number {
  const { ground, share, expected, changed, scale, eventsPerWindow } = input;
  const { tolerance, rule } = ground;
  const blocks = rule.persistence;
  const pooled = eventsPerWindow * scale * blocks;
  if (changed === expected || !tolerance.knows(scale * blocks, pooled, share)) return 0;
  const effective = tolerance.effective(share, scale * blocks, pooled);
  const enough = effective * Math.min(expected, 1 - expected) >= rule.minExpected;
  const missing = share === MISSING && effective * changed >= rule.unexpectedMinEvents;
  if (!enough && !missing) return 0;
  const needed = Math.max(rule.zPage, rule.guardFactor * ground.replay().sustained[share]!);
  const up = changed > expected;
  const pool = further(
    up,
    edge(expected, effective, needed, up),
    floorEdge(partOfShare(share), expected, pooled, rule, up),
  );
  const blockEvents = eventsPerWindow * scale;
  const blockEffective = tolerance.effective(share, scale, blockEvents);
  const block = edge(expected, blockEffective, rule.zBlock, up);
  return exceeds(changed, pool, effective, up) * exceeds(changed, block, blockEffective, up) ** blocks;
}

/** The share at which |z| reaches a critical value; beyond 0 and 1 where none does. */
function edge(expected: number, effective: number, critical: number, up: boolean): number {
  const { low, high } = shareRange(expected, effective, critical);
  if (up) return high >= 1 ? Number.POSITIVE_INFINITY : high;
  return low <= 0 ? Number.NEGATIVE_INFINITY : low;
}

/** The share from which on the floor is passed. */
function floorEdge(
  part: WatchedPart,
  expected: number,
  events: number,
  rule: DecisionRule,
  up: boolean,
): number {
  if (part === "body") return expected + (up ? rule.bodyFloor : -rule.bodyFloor);
  if (part === "missing") {
    const move = Math.max(rule.missingFloor, rule.missingFactor * expected);
    return expected + (up ? move : -move);
  }
  const tail = part === "upper tail" ? 1 - expected : expected;
  const heavier = part === "upper tail" ? !up : up;
  const least = heavier
    ? Math.max(rule.tailFactor * tail, rule.tailMinEvents / events)
    : tail * events >= rule.tailMinExpected
      ? rule.tailLighterFactor * tail
      : -1;
  return part === "upper tail" ? 1 - least : least;
}

function further(up: boolean, a: number, b: number): number {
  return up ? Math.max(a, b) : Math.min(a, b);
}

/** Probability that a share of `effective` events lies at or beyond an edge. */
function exceeds(changed: number, edgeShare: number, effective: number, up: boolean): number {
  if (!up) return exceeds(1 - changed, 1 - edgeShare, effective, true);
  if (edgeShare > 1 || Number.isNaN(edgeShare)) return 0;
  const count = Math.ceil(effective * edgeShare - SLACK);
  if (count <= 0) return 1;
  if (count > effective) return changed >= 1 ? 1 : 0;
  // P(Bin(n, p) ≥ k) = I(p; k, n − k + 1), which also holds a meaning for n that is not whole.
  return incompleteBeta(Math.min(1, Math.max(0, changed)), count, effective - count + 1);
}

const SLACK = 1e-9;
