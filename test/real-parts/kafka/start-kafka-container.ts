import { setTimeout as sleep } from "node:timers/promises";
import {
  GenericContainer,
  getContainerRuntimeClient,
  ImageName,
  type StartedTestContainer,
} from "testcontainers";
import { freePort } from "../free-port.js";
import { NotToBeHad } from "../not-to-be-had.js";
import { took } from "../took.js";
import { brokerAnswers } from "./broker-answers.js";
import { brokerProperties } from "./broker-properties.js";
import { KAFKA_VERSION } from "./kafka-jars.js";
import { newClusterId } from "./new-cluster-id.js";

const IMAGE = `apache/kafka:${KAFKA_VERSION}`;
const DATA = "/tmp/kafka-data";
const CONFIG = "/tmp/server.properties";
const JAVA = "java -Xms128m -Xmx384m -XX:+UseSerialGC -XX:TieredStopAtLevel=1 -cp '/opt/kafka/libs/*'";
const START_WITHIN_MS = 90_000;

export interface KafkaContainer {
  readonly bootstrap: string;
  readonly via: string;
  stop(): Promise<void>;
}

/**
 * A broker in a container, through testcontainers. The image is the official one, or one of the same name built on this machine; all that is asked of
 * it is `java` and the broker's jars in /opt/kafka/libs. It uses the host's network, so that one address serves inside and outside.
 */
export async function startKafkaContainer(): Promise<KafkaContainer> {
  // Its clean-up container would have to be pulled; stop() removes the broker's. What a killed run leaves is found by the label.
  process.env["TESTCONTAINERS_RYUK_DISABLED"] = "true";
  const engine = await imageOrThrow();
  const [port, controllerPort] = [await freePort(), await freePort()];
  const bootstrap = `127.0.0.1:${port}`;
  const properties = brokerProperties({
    advertised: bootstrap,
    listen: bootstrap,
    controller: `127.0.0.1:${controllerPort}`,
    dataDir: DATA,
  });
  const clusterId = newClusterId();
  const command =
    `${JAVA} kafka.tools.StorageTool format --standalone -t ${clusterId} -c ${CONFIG} && ` +
    `exec ${JAVA} kafka.Kafka ${CONFIG}`;
  const container = await new GenericContainer(IMAGE)
    .withNetworkMode("host")
    .withLabels({ "moorline.test": process.env["MOORLINE_TEST_RUN"] ?? String(process.pid) })
    .withEntrypoint(["sh", "-c"])
    .withCommand([command])
    .withCopyContentToContainer([{ content: properties, target: CONFIG }])
    .withStartupTimeout(START_WITHIN_MS)
    .start();
  await untilItAnswers(container, bootstrap);
  const via = `${IMAGE} in a container, Docker engine ${engine}`;
  took("Kafka", via);
  return {
    bootstrap,
    via,
    stop: async () => {
      await container.stop();
    },
  };
}

/** Makes sure of an engine and of the image, which is pulled where it is not there; returns the engine's version. */
async function imageOrThrow(): Promise<string> {
  const client = await getContainerRuntimeClient().catch((error: unknown) => {
    throw new NotToBeHad("a Docker engine", `start one, or set DOCKER_HOST (${(error as Error).message})`);
  });
  const image = ImageName.fromString(IMAGE);
  if (!(await client.image.exists(image))) {
    await client.image.pull(image).catch((error: unknown) => {
      throw new NotToBeHad(
        `the image ${IMAGE}`,
        `pull it, or build it as .ci/run does (${(error as Error).message})`,
      );
    });
  }
  return String(client.info.containerRuntime.serverVersion);
}

/** Waits for the broker; where it does not come, stops the container and fails with its last words. */
async function untilItAnswers(container: StartedTestContainer, bootstrap: string): Promise<void> {
  const deadline = Date.now() + START_WITHIN_MS;
  while (!(await brokerAnswers(bootstrap))) {
    if (Date.now() > deadline) {
      const tail = await lastWords(container);
      await container.stop();
      throw new Error(`the broker in ${IMAGE} does not answer at ${bootstrap}: ${tail}`);
    }
    await sleep(150);
  }
}

async function lastWords(container: StartedTestContainer): Promise<string> {
  let tail = "";
  const logs = await container.logs({ tail: 30 });
  logs.on("data", (chunk: Buffer | string) => {
    tail = (tail + String(chunk)).slice(-2_000);
  });
  await sleep(500);
  logs.destroy();
  return tail;
}
