import { watchedKey } from "../sway/watched-counts.js";
import type { Decision, DecisionGround } from "./decide.js";
import type { Evidence } from "./evidence.js";

/** Why a feature is in its state, in numbers: what the logbook keeps of every change. Plain JSON. */
export interface Why {
  /** What the tolerance was learnt from: the baseline's blocks by `time` or by `rows`, or `assumed`. */
  readonly tolerance: {
    readonly basis: "time" | "rows" | "assumed";
    /** Whether the expected shares follow the hour of the day. */
    readonly seasonal: boolean;
  };
  /** |z| that makes a feature adrift, and the one that makes it strain. */
  readonly needed: { readonly adrift: number; readonly straining: number };
  /** Null where nothing speaks for drift. */
  readonly evidence:
    | (Omit<Evidence, "share"> & {
        /** `p0.99`, or `missing`. */
        readonly share: string;
        readonly windows: number;
        /** By how much the baseline's blocks vary more than independent events would, at this length. */
        readonly designEffect: number;
        /** Greatest |z| that the same rule finds in the baseline itself. */
        readonly baselineItself: number;
      })
    | null;
}

/** The numbers behind a decision. */
export function whyOf({ evidence }: Decision, ground: DecisionGround): Why {
  const { tolerance, rule } = ground;
  return {
    tolerance: { basis: tolerance.basis, seasonal: tolerance.isSeasonal },
    needed: { adrift: rule.zPage, straining: rule.zPage - rule.zStrainBelow },
    evidence: evidence === null ? null : evidenceInFull(evidence, ground),
  };
}

function evidenceInFull(evidence: Evidence, ground: DecisionGround): NonNullable<Why["evidence"]> {
  const windows = evidence.scale * evidence.blocks;
  const kind = evidence.blocks === 1 ? "single" : "sustained";
  return {
    ...evidence,
    share: watchedKey(evidence.share),
    windows,
    designEffect: ground.tolerance.designEffect(evidence.share, windows, evidence.events),
    baselineItself: ground.replay()[kind][evidence.share]!,
  };
}
