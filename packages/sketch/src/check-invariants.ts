import { mixScale, unitShare } from "./scale.js";
import type { SketchState } from "./sketch-state.js";

/** What is wrong with a state, one sentence each; empty when nothing is. For tests and for decoded bytes. */
export function stateProblems(state: SketchState): string[] {
  return [
    ...countProblems(state),
    ...orderProblems(state),
    ...clusterProblems(state),
    ...thresholdProblems(state),
  ];
}

function countProblems(state: SketchState): string[] {
  const problems: string[] = [];
  let weight = 0;
  for (let i = 0; i < state.size; i++) {
    const entry = Math.abs(state.weights[i]!);
    if (!Number.isInteger(entry) || entry < 1) problems.push(`1: entry ${i} weighs ${entry}`);
    weight += entry;
  }
  if (!state.compressed && state.atoms.count > 0)
    problems.push("4: an exact sketch holds atoms outside its entries");
  const held = weight + state.atoms.count;
  if (held !== state.finite)
    problems.push(`1: entries and atoms hold ${held} of ${state.finite} finite events`);
  if (!Number.isFinite(state.sum)) problems.push(`1: the sum is ${state.sum}`);
  return problems;
}

function orderProblems(state: SketchState): string[] {
  const problems: string[] = [];
  const { means, weights, size, min, max } = state;
  for (let i = 0; i < size; i++) {
    const mean = means[i]!;
    if (!(mean >= min && mean <= max))
      problems.push(`2: mean ${mean} of entry ${i} is outside ${min} to ${max}`);
    if (i === 0) continue;
    const distinct = means[i - 1]! < mean;
    const bothPure = weights[i - 1]! > 0 && weights[i]! > 0;
    if (!distinct && (bothPure || means[i - 1]! > mean)) problems.push(`2: entry ${i} does not ascend`);
  }
  const rows = state.atoms.rows;
  rows.forEach(({ value, count }, i) => {
    if (i > 0 && !(rows[i - 1]!.value < value)) problems.push(`2: atom ${i} does not ascend`);
    if (count > 0 && !(value >= min && value <= max))
      problems.push(`2: atom ${value} is outside ${min} to ${max}`);
  });
  return problems;
}

/** A cluster may exceed the unit at its middle, for it was bounded by the unit at its start and the ranks of its day. */
const UNIT_SLACK = 2;

function clusterProblems(state: SketchState): string[] {
  const problems: string[] = [];
  const total = state.finite - state.atoms.count;
  const scale = mixScale(state.coarsest, total);
  let before = 0;
  for (let i = 0; i < state.size; i++) {
    const weight = Math.abs(state.weights[i]!);
    const mixed = state.weights[i]! < 0;
    if (mixed && !state.compressed) problems.push(`4: entry ${i} is mixed in an exact sketch`);
    if (mixed) {
      const q = (before + weight / 2) / total;
      const unit = total * unitShare(scale, q);
      if (weight > UNIT_SLACK * unit)
        problems.push(`3: entry ${i} weighs ${weight}, one unit of k is ${unit}`);
    }
    before += weight;
  }
  return problems;
}

function thresholdProblems(state: SketchState): string[] {
  const counts = state.thresholds?.counts ?? [];
  return counts.flatMap((count, k) => {
    const least = k === 0 ? 0 : counts[k - 1]!;
    return count >= least && count <= state.finite ? [] : [`5: threshold count ${k} is ${count}`];
  });
}
