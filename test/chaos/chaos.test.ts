import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { type ChaosResult, chaosRun } from "./chaos-run.js";
import { auditOfDamagedCopies, FAULTS, type FaultFound } from "./damaged-copies.js";

// The short form of `measure:chaos` (500,000 events, 20 kills, 2 broker restarts). Not covered here: two collectors at once
// (journeys/two-owners), PostgreSQL (journeys/store-postgres), power cuts.
const SEED = 20_261_201;

describe(`invariant 1 and 2 under kills and restarts (seed ${SEED})`, () => {
  let result: ChaosResult;
  let faults: readonly FaultFound[];

  beforeAll(async () => {
    const log = (line: string) => console.info(line);
    result = await chaosRun({
      events: 60_000,
      eventsPerSecond: 2_500,
      kills: 5,
      brokerRestarts: 1,
      seed: SEED,
      log,
    });
    faults = await auditOfDamagedCopies(result, log);
  }, 420_000);

  afterAll(() => {
    if (result !== undefined) console.info(`store of this run: ${result.storePath}`);
  });

  it("the producer put every event into the topic once", () => {
    expect(result.inTopic).toBe(result.produced);
  });

  it("every pane, slice and feature counts exactly what was produced", () => {
    expect(result.differences).toEqual([]);
    expect(result.counted).toBe(result.produced);
    expect([result.kills, result.brokerRestarts]).toEqual([5, 1]);
  });

  it("checkpoints and owners were many, so that kills came between them", () => {
    expect(result.checkpoints).toBeGreaterThan(4 * 6);
    expect(result.claims).toBeGreaterThan(2 * 6);
  });

  it("audit is clean", () => {
    expect(JSON.parse(result.audit.out)).toMatchObject({ clean: true, findings: [] });
    expect(result.audit.status).toBe(0);
  });

  it.each(FAULTS.map((fault) => fault.name))("audit fails on a store with %s", (name) => {
    const fault = faults.find((one) => one.name === name);
    expect(fault?.found).toBe(true);
    expect(fault?.firstFinding).not.toBe("");
  });
});
