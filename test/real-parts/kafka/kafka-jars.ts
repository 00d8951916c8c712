import { existsSync } from "node:fs";
import { mkdir, rename, rm } from "node:fs/promises";
import { homedir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { NotToBeHad } from "../not-to-be-had.js";
import { onPath } from "../on-path.js";
import { runProgram } from "../run-program.js";

export const KAFKA_VERSION = "4.1.1";

/** Where jars are kept between runs. */
export function testCache(): string {
  return join(process.env["XDG_CACHE_HOME"] ?? join(homedir(), ".cache"), "moorline-test");
}

/** The folder of a broker's jars, copied once by Maven. */
export async function kafkaJars(): Promise<string> {
  const folder = join(testCache(), `kafka-${KAFKA_VERSION}`);
  if (existsSync(join(folder, `kafka_2.13-${KAFKA_VERSION}.jar`))) return folder;
  const mvn = onPath("mvn");
  if (mvn === null || onPath("java") === null) {
    throw new NotToBeHad(
      "Apache Kafka",
      "install Java 17 and Maven, or set MOORLINE_TEST_KAFKA=host:port of a broker",
    );
  }
  const part = `${folder}.${process.pid}`;
  await mkdir(part, { recursive: true });
  const pom = fileURLToPath(new URL("./pom.xml", import.meta.url));
  const args = [
    "-q",
    "-B",
    "-f",
    pom,
    "dependency:copy-dependencies",
    "-DincludeScope=runtime",
    `-DoutputDirectory=${part}`,
  ];
  const { exitCode, stdout, stderr } = await runProgram(mvn, args);
  if (exitCode !== 0)
    throw new NotToBeHad("Apache Kafka", `Maven could not copy its jars: ${(stdout + stderr).slice(-500)}`);
  if (existsSync(folder)) await rm(part, { recursive: true });
  else await rename(part, folder);
  return folder;
}
