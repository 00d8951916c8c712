// measure:chaos – 500,000 events while the collector is killed 20 times and the broker restarted twice; counts, audit and the
// audit of a damaged copy. Talks on stderr; the last line of stdout is one JSON object.
import { chaosRun } from "./chaos-run.js";
import { auditOfDamagedCopies } from "./damaged-copies.js";

const seed = Number(process.env["MOORLINE_CHAOS_SEED"] ?? Date.now() % 1_000_000);
const log = (line: string) => process.stderr.write(`${line}\n`);
log(`seed ${seed}`);

const result = await chaosRun({
  events: 500_000,
  eventsPerSecond: 3_500,
  kills: 20,
  brokerRestarts: 2,
  seed,
  log,
});
const faults = await auditOfDamagedCopies(result, log);
const { storePath, configPath, folder, audit, ...figures } = result;
const exact = result.differences.length === 0 && result.counted === result.produced && audit.status === 0;
process.stdout.write(
  `${JSON.stringify({ measure: "chaos", seed, ...figures, auditClean: audit.status === 0, faults, exact, node: process.version })}\n`,
);
process.exitCode = exact && faults.every((fault) => fault.found) ? 0 : 1;
