import { isMoorlineError } from "@moorline/errors";
import type { Checkpoint, PartitionKey } from "@moorline/store";
import type { Logger, Telemetry } from "@moorline/telemetry";
import type { CollectorReports, OutsideSystem } from "./collector-reports.js";

/** Reports of one stream as log lines, metrics and readiness. */
export class TelemetryReports implements CollectorReports {
  readonly #telemetry: Telemetry;
  readonly #stream: string;
  readonly #logger: Logger;
  readonly #away = new Map<OutsideSystem, number>();
  readonly #halted = new Set<string>();
  readonly #lagging = new Map<string, PartitionKey>();

  constructor(telemetry: Telemetry, stream: string) {
    this.#telemetry = telemetry;
    this.#stream = stream;
    this.#logger = telemetry.logger.child({ stream });
    telemetry.health.set(this.#part("source"), "not yet opened");
    // Series that exist from the start: an alert on their growth sees the first event too.
    for (const outcome of ["counted", "late", "dead-lettered"]) {
      telemetry.metrics.eventsTotal.inc({ stream, outcome }, 0);
    }
  }

  opened(key: PartitionKey, epoch: number, nextOffset: number): void {
    this.back("source");
    this.#logger.info(
      { ...at(key), epoch, nextOffset },
      "partition claimed, reading goes on at its stored offset",
    );
  }

  checkpointed(checkpoint: Checkpoint, durationMs: number): void {
    const { metrics } = this.#telemetry;
    const stream = this.#stream;
    const dead = Object.values(checkpoint.deadLetters).reduce((sum, count) => sum + count, 0);
    metrics.eventsTotal.inc({ stream, outcome: "counted" }, checkpoint.events);
    metrics.eventsTotal.inc({ stream, outcome: "late" }, checkpoint.lateEvents);
    metrics.eventsTotal.inc({ stream, outcome: "dead-lettered" }, dead);
    for (const [reason, count] of Object.entries(checkpoint.deadLetters)) {
      metrics.deadLettersTotal.inc({ stream, reason }, count);
    }
    metrics.checkpointDuration.observe({ stream }, durationMs / 1000);

    const { events, lateEvents, deadLetters, fromOffset, toOffset } = checkpoint;
    const segments = checkpoint.segments.length;
    const facts = { ...at(checkpoint), fromOffset, toOffset, events, lateEvents, segments, durationMs };
    if (dead > 0)
      this.#logger.warn({ ...facts, deadLetters }, "checkpoint written; some events could not be counted");
    else this.#logger.debug(facts, "checkpoint written");
  }

  lag(key: PartitionKey, lagMessages: number): void {
    const labels = { stream: this.#stream, topic: key.topic, partition: String(key.partition) };
    this.#lagging.set(`${key.partition}/${key.topic}`, key);
    this.#telemetry.metrics.lagMessages.set(labels, lagMessages);
  }

  gap(key: PartitionKey, fromOffset: number, toOffset: number): void {
    this.#telemetry.metrics.gapMessagesTotal.inc({ stream: this.#stream }, toOffset - fromOffset);
    const hint =
      "retention was shorter than the collector was away; the gap is in the logbook and in the audit";
    this.#logger.error(
      { ...at(key), fromOffset, toOffset, hint },
      "offsets were gone before they could be read",
    );
  }

  halted(key: PartitionKey, reason: string): void {
    const name = this.#part(`partition ${key.topic}/${key.partition}`);
    this.#halted.add(name);
    this.#telemetry.health.set(name, reason);
    const hint =
      "find out whether the topic was made anew or the file replaced; nothing of it is read until then";
    this.#logger.error({ ...at(key), reason, hint }, "partition halted");
  }

  fenced(key: PartitionKey, epoch: number): void {
    this.#telemetry.metrics.fencedTotal.inc({ stream: this.#stream });
    const hint = "two collectors believed to own it; the newer epoch goes on, nothing was counted twice";
    this.#logger.warn(
      { ...at(key), epoch, hint },
      "another collector has the partition: this one wrote nothing",
    );
  }

  rejoined(): void {
    this.#telemetry.metrics.rejoinsTotal.inc({ stream: this.#stream });
    for (const name of this.#halted) this.#telemetry.health.clear(name);
    this.#halted.clear();
    // Another collector may have these now: a lag that nobody updates would look like one.
    for (const { topic, partition } of this.#lagging.values()) {
      this.#telemetry.metrics.lagMessages.remove({
        stream: this.#stream,
        topic,
        partition: String(partition),
      });
    }
    this.#lagging.clear();
    this.#logger.info("partitions released; what was not yet written is read again");
  }

  sliceLimitReached(key: string, limit: number): void {
    this.#telemetry.metrics.sliceOverflowTotal.inc({ stream: this.#stream, key });
    const hint = "raise sliceLimit, or slice by a key with fewer values";
    this.#logger.warn(
      { key, limit, hint },
      "slice key has more values than its limit: the rest is counted as other",
    );
  }

  baselineChanged(baselineId: string | null): void {
    this.#logger.info({ baselineId }, "active baseline changed; new segments carry its thresholds");
  }

  away(system: OutsideSystem, error: unknown, attempt: number, waitMs: number): void {
    const reason = error instanceof Error ? error.message : String(error);
    this.#away.set(system, (this.#away.get(system) ?? 0) + 1);
    this.#telemetry.metrics.awayTotal.inc({ stream: this.#stream, system });
    this.#telemetry.health.set(this.#part(system), reason);
    const facts = isMoorlineError(error) ? { code: error.code, hint: error.hint } : {};
    this.#logger.warn(
      { system, reason, attempt, waitMs, ...facts },
      `${system} does not answer; trying again`,
    );
  }

  back(system: OutsideSystem): void {
    const tries = this.#away.get(system) ?? 0;
    this.#telemetry.health.set(this.#part(system), null);
    if (tries === 0) return;
    this.#away.delete(system);
    this.#logger.info({ system, tries }, `${system} answers again`);
  }

  #part(name: string): string {
    return `${this.#stream}: ${name}`;
  }
}

function at(key: PartitionKey): { topic: string; partition: number } {
  return { topic: key.topic, partition: key.partition };
}
