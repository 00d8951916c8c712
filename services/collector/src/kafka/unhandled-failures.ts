import { isKafkaError } from "./kafka-client.js";

const sessions = new Set<(error: unknown) => void>();

/**
 * kafkajs loses some failures of a dying consumer: they reach nobody but the process. Until the returned function is called they go to the
 * listener. Any other unhandled rejection is a bug and ends the process, as it would without this.
 */
export function onUnhandledKafkaFailure(listener: (error: unknown) => void): () => void {
  if (sessions.size === 0) process.on("unhandledRejection", route);
  sessions.add(listener);
  return () => {
    sessions.delete(listener);
    if (sessions.size === 0) process.off("unhandledRejection", route);
  };
}

function route(reason: unknown): void {
  if (!isKafkaError(reason)) {
    setImmediate(() => {
      throw reason;
    });
    return;
  }
  // It does not say whose it is: a session too many made anew costs some seconds, one too few its events.
  for (const listener of [...sessions]) listener(reason);
}
