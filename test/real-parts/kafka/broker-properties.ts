export interface BrokerAddresses {
  /** What clients connect to, as the broker advertises it. */
  readonly advertised: string;
  readonly listen: string;
  readonly controller: string;
  readonly dataDir: string;
}

/** One broker that is its own controller, small and quick to start; the same for a host process and a container. */
export function brokerProperties(at: BrokerAddresses, extra: Readonly<Record<string, string>> = {}): string {
  const properties: Record<string, string> = {
    "process.roles": "broker,controller",
    "node.id": "1",
    "controller.quorum.bootstrap.servers": at.controller,
    listeners: `PLAINTEXT://${at.listen},CONTROLLER://${at.controller}`,
    "advertised.listeners": `PLAINTEXT://${at.advertised}`,
    "controller.listener.names": "CONTROLLER",
    "inter.broker.listener.name": "PLAINTEXT",
    "listener.security.protocol.map": "PLAINTEXT:PLAINTEXT,CONTROLLER:PLAINTEXT",
    "log.dirs": at.dataDir,
    "offsets.topic.replication.factor": "1",
    "offsets.topic.num.partitions": "1",
    "transaction.state.log.replication.factor": "1",
    "transaction.state.log.min.isr": "1",
    "share.coordinator.state.topic.replication.factor": "1",
    "share.coordinator.state.topic.min.isr": "1",
    "group.initial.rebalance.delay.ms": "0",
    "group.min.session.timeout.ms": "1000",
    // A broker that was killed is let back in after this, not after nine seconds.
    "broker.session.timeout.ms": "3000",
    "broker.heartbeat.interval.ms": "500",
    "auto.create.topics.enable": "false",
    "num.network.threads": "2",
    "num.io.threads": "2",
    "log.segment.bytes": "16777216",
    ...extra,
  };
  return Object.entries(properties)
    .map(([key, value]) => `${key}=${value}\n`)
    .join("");
}
