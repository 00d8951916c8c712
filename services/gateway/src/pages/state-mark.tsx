import type { FeatureState } from "@moorline/store";
import type { VNode } from "preact";

/** A shape for each state, beside its word: told without colour. */
const SHAPES: Record<FeatureState, VNode> = {
  adrift: <path d="M10 2 L18 18 L2 18 Z" />,
  straining: <path d="M10 3 L17 17 L3 17 Z" />,
  silent: <path d="M3 10 H17" />,
  thin: <circle cx="10" cy="10" r="7" stroke-dasharray="3 3" />,
  holding: <circle cx="10" cy="10" r="7" />,
};

export function StateMark({ state }: { readonly state: FeatureState }): VNode {
  return (
    <span class={`state state-${state}`}>
      <svg viewBox="0 0 20 20" aria-hidden="true">
        {SHAPES[state]}
      </svg>
      {state}
    </span>
  );
}
