import { MoorlineError } from "@moorline/errors";
import type { Checkpoint } from "./store.js";

/**
 * Refuses a checkpoint that could not be audited: what is written once is never changed.
 *
 * @throws MOORLINE_INPUT_CHECKPOINT naming the first thing that does not add up
 */
export function checkCheckpoint(checkpoint: Checkpoint): void {
  const { fromOffset, toOffset, events, lateEvents, segments, gaps } = checkpoint;
  const dead = Object.values(checkpoint.deadLetters);
  const counts = [
    fromOffset,
    toOffset,
    events,
    lateEvents,
    ...dead,
    ...segments.map((segment) => segment.events),
  ];
  const fail = (reason: string): never => {
    throw new MoorlineError("MOORLINE_INPUT_CHECKPOINT", {
      partition: `${checkpoint.topic}/${checkpoint.partition}`,
      reason,
    });
  };
  if (!counts.every((count) => Number.isSafeInteger(count) && count >= 0))
    fail("a count or offset is no whole number");
  if (toOffset < fromOffset) fail(`it ends at ${toOffset}, before its start ${fromOffset}`);
  if (toOffset === fromOffset && (events > 0 || dead.length > 0 || segments.length > 0 || gaps.length > 0)) {
    fail("it covers no offset and yet holds events");
  }
  if (lateEvents > events) fail(`${lateEvents} of ${events} events are late`);
  const inAll = segments.reduce((sum, segment) => sum + (segment.slice === "all" ? segment.events : 0), 0);
  if (inAll !== events) fail(`its segments of slice all hold ${inAll} events, it says ${events}`);
  if (segments.some((segment) => !Number.isSafeInteger(segment.paneStartMs)))
    fail("a pane start is no whole number");
  let at = fromOffset;
  for (const gap of gaps) {
    if (gap.fromOffset < at || gap.toOffset <= gap.fromOffset || gap.toOffset > toOffset) {
      fail(`gap ${gap.fromOffset} to ${gap.toOffset} is out of order or out of range`);
    }
    at = gap.toOffset;
  }
}
