import { NotToBeHad } from "./not-to-be-had.js";
import { onPath } from "./on-path.js";
import { runProgram } from "./run-program.js";

/** The Python that has librdkafka's binding: a producer that is not ours. */
export async function confluentPython(): Promise<string> {
  const candidates = [process.env["MOORLINE_TEST_PYTHON"], "/usr/bin/python3", onPath("python3")];
  for (const python of candidates) {
    if (python === undefined || python === null) continue;
    const { exitCode } = await runProgram(python, ["-c", "import confluent_kafka"]).catch(() => ({
      exitCode: 1,
    }));
    if (exitCode === 0) return python;
  }
  throw new NotToBeHad(
    "python3-confluent-kafka",
    "install it (a Debian package), or set MOORLINE_TEST_PYTHON to a Python that imports confluent_kafka",
  );
}
