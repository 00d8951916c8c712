import { setTimeout as sleep } from "node:timers/promises";
import type { KafkaSourceConfig } from "@moorline/config";
import type { Admin } from "kafkajs";
import { kafkaAway } from "./kafka-client.js";

/** Where a partition's log begins and ends now. */
export interface LogEnds {
  readonly lowOffset: number;
  readonly endOffset: number;
}

const ATTEMPTS = 8;
const FIRST_WAIT_MS = 250;

/** Asks the broker where the logs of a topic's partitions begin and end. */
export class LogEndsReader {
  readonly #admin: Admin;
  readonly #config: KafkaSourceConfig;

  constructor(admin: Admin, config: KafkaSourceConfig) {
    this.#admin = admin;
    this.#config = config;
  }

  /** By partition; tries for some seconds unless `isOver`. @throws MOORLINE_UPSTREAM_KAFKA */
  async read(topic: string, isOver: () => boolean): Promise<Map<number, LogEnds>> {
    for (let attempt = 1; ; attempt++) {
      try {
        return await this.readOnce(topic);
      } catch (error) {
        if (attempt === ATTEMPTS || isOver()) throw kafkaAway(this.#config, error);
        await sleep(FIRST_WAIT_MS * attempt);
      }
    }
  }

  async readOnce(topic: string): Promise<Map<number, LogEnds>> {
    const offsets = await this.#admin.fetchTopicOffsets(topic);
    return new Map(
      offsets.map((o) => [o.partition, { lowOffset: Number(o.low), endOffset: Number(o.high) }]),
    );
  }
}
