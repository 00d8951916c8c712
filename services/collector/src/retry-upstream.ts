import { setTimeout as sleep } from "node:timers/promises";
import { isMoorlineError } from "@moorline/errors";
import { within } from "./within.js";

export interface RetryPlan {
  /** Called after each failure that is tried again. */
  onFailure(error: unknown, attempt: number, waitMs: number): void;
  /** True: give up and throw the last failure. */
  isOver(): boolean;
  /** Called now and then while it lasts; what it throws ends the retries, and an attempt under way is left to itself. */
  meanwhile?: () => Promise<void>;
}

const FIRST_WAIT_MS = 100;
const LONGEST_WAIT_MS = 5_000;
/** Waits are cut into steps of this length, so that heartbeats go on and a stop is seen. */
const STEP_MS = 500;

/**
 * Does something that hangs on an outside system until it works. Waits double up to 5 s, each between half and all of its length at
 * random, so that collectors that lost the same store do not come back in step. Errors that no waiting mends are thrown at once.
 */
export async function retryUpstream<T>(action: () => Promise<T>, plan: RetryPlan): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    try {
      return await attended(action(), plan);
    } catch (error) {
      if (!isMoorlineError(error) || !error.retryable || plan.isOver()) throw error;
      const longestMs = Math.min(LONGEST_WAIT_MS, FIRST_WAIT_MS * 2 ** Math.min(attempt - 1, 10));
      const waitMs = Math.round(longestMs * (0.5 + Math.random() / 2));
      plan.onFailure(error, attempt, waitMs);
      await waitInSteps(waitMs, plan);
      if (plan.isOver()) throw error;
    }
  }
}

/** A single attempt can take long too: a database waits for its locks by itself. */
async function attended<T>(attempt: Promise<T>, plan: RetryPlan): Promise<T> {
  if (plan.meanwhile === undefined) return attempt;
  let running = true;
  const over = attempt.then(
    () => {
      running = false;
    },
    () => {
      running = false;
    },
  );
  while (running) {
    await within(STEP_MS, over);
    if (running) await plan.meanwhile();
  }
  return attempt;
}

async function waitInSteps(waitMs: number, plan: RetryPlan): Promise<void> {
  for (let left = waitMs; left > 0 && !plan.isOver(); left -= STEP_MS) {
    await sleep(Math.min(STEP_MS, left));
    await plan.meanwhile?.();
  }
}
