import { Kafka, logLevel } from "kafkajs";

/** True when the broker lists its topics: an open port alone is not readiness. */
export async function brokerAnswers(bootstrap: string): Promise<boolean> {
  const admin = new Kafka({
    brokers: [bootstrap],
    logLevel: logLevel.NOTHING,
    connectionTimeout: 1_000,
    requestTimeout: 3_000,
    retry: { retries: 0 },
  }).admin();
  try {
    await admin.connect();
    await admin.listTopics();
    return true;
  } catch {
    return false;
  } finally {
    await admin.disconnect().catch(() => {});
  }
}
