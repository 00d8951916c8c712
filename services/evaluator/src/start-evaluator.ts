import { randomUUID } from "node:crypto";
import { hostname } from "node:os";
import { setTimeout as sleep } from "node:timers/promises";
import type { MoorlineConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import type { RunningService, Telemetry } from "@moorline/telemetry";
import { StreamEvaluator } from "./stream-evaluator.js";

export interface EvaluatorOptions {
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  /** The wall clock, for tests. */
  readonly nowMs?: () => number;
  /** Name of this evaluator in the leases, no other's; default host name, process id and a random part: containers share the first two. */
  readonly instance?: string;
}

const LONGEST_WAIT_MS = 15_000;
/** A partition that changed hands has its first checkpoint after one of these times, a rebalance and a slow one allowed for. */
const SETTLE_CHECKPOINTS = 6;

/**
 * Evaluates every stream of the config until it is stopped. A store that is away is tried again with growing waits and shown in readiness;
 * `ended` rejects only for an error that another try cannot mend.
 */
export async function startEvaluator(options: EvaluatorOptions): Promise<RunningService> {
  const { config, store, telemetry } = options;
  const owner = options.instance ?? `${hostname()}-${process.pid}-${randomUUID().slice(0, 8)}`;
  const nowMs = options.nowMs ?? Date.now;
  const settleMs = SETTLE_CHECKPOINTS * config.collector.checkpointMs;
  const stopping = new AbortController();
  const evaluators = config.streams.map(
    (stream) => new StreamEvaluator({ stream, store, telemetry, owner, settleMs, nowMs }),
  );
  const loops = evaluators.map((evaluator, index) =>
    evaluateUntilStopped(evaluator, config.streams[index]!.name, options, stopping.signal),
  );
  const ended = Promise.all(loops).then(() => {});
  ended.catch(() => {});
  let stopped: Promise<void> | null = null;
  return {
    name: "evaluator",
    ended,
    stop: () => {
      stopped ??= (async () => {
        stopping.abort();
        for (const evaluator of evaluators) evaluator.stopSoon();
        await Promise.allSettled(loops);
        await Promise.allSettled(evaluators.map((evaluator) => evaluator.release()));
        telemetry.logger.info("evaluator stopped");
      })();
      return stopped;
    },
  };
}

async function evaluateUntilStopped(
  evaluator: StreamEvaluator,
  stream: string,
  { config, telemetry }: EvaluatorOptions,
  signal: AbortSignal,
): Promise<void> {
  const part = `evaluator ${stream}`;
  let failures = 0;
  while (!signal.aborted) {
    let waitMs = config.evaluator.tickMs;
    try {
      const more = await evaluator.tick();
      if (more) waitMs = 0;
      if (failures > 0) telemetry.logger.info({ stream }, "the store answers again");
      failures = 0;
      telemetry.health.set(part, null);
    } catch (error) {
      if (!isMoorlineError(error) || !error.retryable) throw error;
      failures += 1;
      // Up to a quarter more or less, so that several processes do not come back at the same instant.
      waitMs = Math.min(LONGEST_WAIT_MS, 250 * 2 ** failures) * (0.75 + Math.random() / 2);
      telemetry.health.set(part, error.message);
      telemetry.logger.warn({ stream, attempt: failures, hint: error.hint }, error.message);
    }
    await pause(waitMs, signal);
  }
}

async function pause(waitMs: number, signal: AbortSignal): Promise<void> {
  try {
    await sleep(waitMs, undefined, { signal });
  } catch {
    // Stopped while waiting: the loop looks at the signal itself.
  }
}
