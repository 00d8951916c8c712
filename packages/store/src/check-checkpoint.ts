import { MoorlineError } from "@moorline/errors";
import { checkNames } from "./check-names.js";
import { sliceKey } from "./slice-key.js";
import type { Checkpoint } from "./store.js";

/**
 * Refuses a checkpoint that could not be audited: what is written once is never changed.
 *
 * @throws MOORLINE_INPUT_CHECKPOINT naming the first thing that does not add up
 * @throws MOORLINE_INPUT_STORE_NAME when stream, topic and slice are too long together
 */
export function checkCheckpoint(checkpoint: Checkpoint): void {
  const { stream, topic } = checkpoint;
  const reason =
    numberProblem(checkpoint) ??
    rangeProblem(checkpoint) ??
    gapProblem(checkpoint) ??
    countProblem(checkpoint) ??
    segmentProblem(checkpoint);
  if (reason !== null) {
    throw new MoorlineError("MOORLINE_INPUT_CHECKPOINT", {
      partition: `${topic}/${checkpoint.partition}`,
      reason,
    });
  }
  for (const { slice } of checkpoint.segments) checkNames([stream, topic, slice]);
}

function numberProblem({ segments, deadLetters, gaps, ...checkpoint }: Checkpoint): string | null {
  const { fromOffset, toOffset, events, lateEvents, maxEventMs, atMs } = checkpoint;
  const counts = [
    ...[fromOffset, toOffset, events, lateEvents, ...Object.values(deadLetters)],
    ...segments.map((segment) => segment.events),
    ...gaps.flatMap((gap) => [gap.fromOffset, gap.toOffset]),
  ];
  if (!counts.every((count) => Number.isSafeInteger(count) && count >= 0)) {
    return "a count or offset is no whole number";
  }
  const times = [atMs, maxEventMs ?? 0, ...segments.map((segment) => segment.paneStartMs)];
  return times.every(Number.isSafeInteger) ? null : "a time is no whole number";
}

function rangeProblem({
  fromOffset,
  toOffset,
  events,
  segments,
  deadLetters,
  gaps,
}: Checkpoint): string | null {
  if (toOffset < fromOffset) return `it ends at ${toOffset}, before its start ${fromOffset}`;
  const empty =
    events === 0 && segments.length === 0 && deadLettersOf(deadLetters) === 0 && gaps.length === 0;
  return toOffset === fromOffset && !empty ? "it covers no offset and yet holds something" : null;
}

function gapProblem(checkpoint: Checkpoint): string | null {
  let at = checkpoint.fromOffset;
  for (const { topic, partition, fromOffset, toOffset } of checkpoint.gaps) {
    if (topic !== checkpoint.topic || partition !== checkpoint.partition)
      return "a gap is of another partition";
    if (fromOffset < at || toOffset <= fromOffset || toOffset > checkpoint.toOffset) {
      return `gap ${fromOffset} to ${toOffset} is out of order or out of range`;
    }
    at = toOffset;
  }
  return null;
}

/** Every event and dead letter has an offset of its own. */
function countProblem({
  fromOffset,
  toOffset,
  events,
  lateEvents,
  deadLetters,
  gaps,
}: Checkpoint): string | null {
  if (lateEvents > events) return `${lateEvents} of ${events} events are late`;
  const offsets = gaps.reduce((left, gap) => left - (gap.toOffset - gap.fromOffset), toOffset - fromOffset);
  const counted = events + deadLettersOf(deadLetters);
  return counted > offsets ? `it counts ${counted} events in ${offsets} offsets` : null;
}

/** Slice `all` holds every event once, and so does each key over its values. */
function segmentProblem({ events, segments }: Checkpoint): string | null {
  const seen = new Set<string>();
  const byKey = new Map<string, number>([["all", 0]]);
  for (const { paneStartMs, slice, events: inSegment } of segments) {
    const name = `${paneStartMs} ${slice}`;
    if (seen.has(name)) return `pane ${paneStartMs} and slice ${slice} stand twice`;
    seen.add(name);
    const key = sliceKey(slice);
    byKey.set(key, (byKey.get(key) ?? 0) + inSegment);
  }
  for (const [key, inKey] of byKey) {
    if (inKey !== events) return `its segments of ${key} hold ${inKey} events, it says ${events}`;
  }
  return null;
}

function deadLettersOf(deadLetters: Checkpoint["deadLetters"]): number {
  return Object.values(deadLetters).reduce((sum, count) => sum + count, 0);
}
