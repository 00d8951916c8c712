export { CHROMIUM_FLAGS, chromiumPath } from "./chromium-path.js";
export { CliChild, type CliOptions, type CliResult, runCli } from "./cli-child.js";
export { confluentPython } from "./confluent-python.js";
export { freePort } from "./free-port.js";
export { type BrokerAddresses, brokerProperties } from "./kafka/broker-properties.js";
export { KAFKA_VERSION, kafkaJars, testCache } from "./kafka/kafka-jars.js";
export { type KafkaOptions, type RunningKafka, startKafka } from "./kafka/start-kafka.js";
export { type KafkaContainer, startKafkaContainer } from "./kafka/start-kafka-container.js";
export { NotToBeHad } from "./not-to-be-had.js";
export { onPath } from "./on-path.js";
export { type ProgramResult, runProgram } from "./run-program.js";
export { type RunningPostgres, startPostgres } from "./start-postgres.js";
export {
  amtool,
  promtool,
  type RunningServer,
  startAlertmanager,
  startPrometheus,
} from "./start-prometheus.js";
