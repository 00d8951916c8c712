import { NotToBeHad } from "./not-to-be-had.js";
import { onPath } from "./on-path.js";
import { runProgram } from "./run-program.js";
import { took } from "./took.js";

const VERSIONS = "import confluent_kafka as c; print(c.version()[0], c.libversion()[0])";

/** The Python that has librdkafka's binding: a producer that is not ours. */
export async function confluentPython(): Promise<string> {
  const candidates = [process.env["MOORLINE_TEST_PYTHON"], "/usr/bin/python3", onPath("python3")];
  for (const python of candidates) {
    if (python === undefined || python === null) continue;
    const { exitCode, stdout } = await runProgram(python, ["-c", VERSIONS]).catch(() => ({
      exitCode: 1,
      stdout: "",
    }));
    if (exitCode !== 0) continue;
    const [binding, library] = stdout.trim().split(" ");
    took("Kafka producer", `${python}, confluent-kafka ${binding}, librdkafka ${library}`);
    return python;
  }
  throw new NotToBeHad(
    "python3-confluent-kafka",
    "install it (a Debian package), or set MOORLINE_TEST_PYTHON to a Python that imports confluent_kafka",
  );
}
