import { mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { freePort } from "../free-port.js";
import { HostProcess } from "../host-process.js";
import { runProgram } from "../run-program.js";
import { took } from "../took.js";
import { brokerAnswers } from "./broker-answers.js";
import { brokerProperties } from "./broker-properties.js";
import { KAFKA_VERSION, kafkaJars } from "./kafka-jars.js";
import { newClusterId } from "./new-cluster-id.js";

export interface KafkaOptions {
  readonly port?: number;
  /** Properties of the broker on top of the small set that tests use. */
  readonly extraConfig?: Readonly<Record<string, string>>;
  /** Java heap; default 384m. */
  readonly heap?: string;
  /** True: a broker of one's own even where MOORLINE_TEST_KAFKA is set, for tests that stop it or change its properties. */
  readonly own?: boolean;
}

export interface RunningKafka {
  readonly bootstrap: string;
  readonly dataDir: string;
  readonly via: string;
  stop(): Promise<void>;
  /** SIGKILL: nothing is flushed, nobody is told. */
  kill(): Promise<void>;
  /** Starts again on the same port and data. */
  restart(): Promise<void>;
}

const JAVA_FLAGS = [
  "-Xms128m",
  "-XX:+UseSerialGC",
  "-XX:TieredStopAtLevel=1",
  "-Dorg.slf4j.simpleLogger.defaultLogLevel=warn",
];

/** A real broker: the one in MOORLINE_TEST_KAFKA, or one of this machine from Maven's jars. */
export async function startKafka(options: KafkaOptions = {}): Promise<RunningKafka> {
  const given = process.env["MOORLINE_TEST_KAFKA"];
  if (given !== undefined && options.own !== true && options.extraConfig === undefined)
    return givenBroker(given);
  const jars = await kafkaJars();
  const [port, controllerPort] = [options.port ?? (await freePort()), await freePort()];
  const home = await mkdtemp(join(tmpdir(), "moorline-kafka-"));
  const dataDir = join(home, "data");
  const config = join(home, "server.properties");
  const bootstrap = `127.0.0.1:${port}`;
  await mkdir(dataDir);
  const addresses = {
    advertised: bootstrap,
    listen: bootstrap,
    controller: `127.0.0.1:${controllerPort}`,
    dataDir,
  };
  await writeFile(config, brokerProperties(addresses, options.extraConfig));
  // Native libraries are unpacked there; a broker that is killed does not delete them.
  const java = [
    `-Xmx${options.heap ?? "384m"}`,
    `-Djava.io.tmpdir=${home}`,
    ...JAVA_FLAGS,
    "-cp",
    `${jars}/*`,
  ];
  await format(java, config);
  const start = async () => {
    const broker = new HostProcess("the Kafka broker", "java", [...java, "kafka.Kafka", config], {
      cwd: home,
    });
    await broker.untilReady(() => brokerAnswers(bootstrap));
    return broker;
  };
  let broker = await start();
  const via = `Apache Kafka ${KAFKA_VERSION} from Maven jars on this machine`;
  took("Kafka", via);
  return {
    bootstrap,
    dataDir,
    via,
    stop: async () => {
      await broker.end("SIGKILL");
      await rm(home, { recursive: true, force: true });
    },
    kill: () => broker.end("SIGKILL"),
    restart: async () => {
      await broker.end("SIGKILL");
      broker = await start();
    },
  };
}

async function format(java: readonly string[], config: string): Promise<void> {
  const clusterId = newClusterId();
  const args = [...java, "kafka.tools.StorageTool", "format", "--standalone", "-t", clusterId, "-c", config];
  const { exitCode, stdout, stderr } = await runProgram("java", args);
  if (exitCode !== 0) throw new Error(`Kafka's storage could not be formatted: ${stdout}${stderr}`);
}

async function givenBroker(bootstrap: string): Promise<RunningKafka> {
  if (!(await brokerAnswers(bootstrap)))
    throw new Error(`no broker answers at MOORLINE_TEST_KAFKA=${bootstrap}`);
  took("Kafka", `MOORLINE_TEST_KAFKA=${bootstrap}`);
  const cannot = async () => {
    throw new Error("a broker given by MOORLINE_TEST_KAFKA cannot be stopped; ask for one with own: true");
  };
  return {
    bootstrap,
    dataDir: "",
    via: "MOORLINE_TEST_KAFKA",
    stop: async () => {},
    kill: cannot,
    restart: cannot,
  };
}
