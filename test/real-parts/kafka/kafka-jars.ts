import { existsSync, readFileSync } from "node:fs";
import { mkdir, rename, rm } from "node:fs/promises";
import { homedir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { NotToBeHad } from "../not-to-be-had.js";
import { onPath } from "../on-path.js";
import { runProgram } from "../run-program.js";

const POM = fileURLToPath(new URL("./pom.xml", import.meta.url));

/** The version that pom.xml asks Maven for. */
export const KAFKA_VERSION = versionIn(readFileSync(POM, "utf8"));

/** Where jars are kept between runs. A cache folder of no name is none, as the XDG base directory specification says. */
export function testCache(): string {
  return join(process.env["XDG_CACHE_HOME"] || join(homedir(), ".cache"), "moorline-test");
}

/** The folder of a broker's jars, copied once by Maven. */
export async function kafkaJars(): Promise<string> {
  const folder = join(testCache(), `kafka-${KAFKA_VERSION}`);
  if (isWhole(folder)) return folder;
  const mvn = onPath("mvn");
  if (mvn === null || onPath("java") === null) {
    throw new NotToBeHad(
      "Apache Kafka",
      "install Java 17 and Maven, or set MOORLINE_TEST_KAFKA=host:port of a broker",
    );
  }
  const part = `${folder}.${process.pid}`;
  await mkdir(part, { recursive: true });
  const args = [
    "-q",
    "-B",
    "-f",
    POM,
    "dependency:copy-dependencies",
    "-DincludeScope=runtime",
    `-DoutputDirectory=${part}`,
  ];
  const { exitCode, stdout, stderr } = await runProgram(mvn, args);
  if (exitCode !== 0)
    throw new NotToBeHad("Apache Kafka", `Maven could not copy its jars: ${(stdout + stderr).slice(-500)}`);
  if (isWhole(folder)) {
    await rm(part, { recursive: true });
  } else {
    await rm(folder, { recursive: true, force: true });
    await rename(part, folder);
  }
  return folder;
}

/** A copy that was broken off lacks jars; Maven's own folder is only renamed into place when it is done. */
function isWhole(folder: string): boolean {
  return existsSync(join(folder, `kafka_2.13-${KAFKA_VERSION}.jar`));
}

function versionIn(pom: string): string {
  const version = /<kafka\.version>(.+?)</.exec(pom)?.[1];
  if (version === undefined) throw new Error("pom.xml has no kafka.version");
  return version;
}
