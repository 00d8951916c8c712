import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { auditLaws } from "./laws/audit-laws.js";
import { baselineLaws } from "./laws/baseline-laws.js";
import { evaluationLaws } from "./laws/evaluation-laws.js";
import { ingestLaws } from "./laws/ingest-laws.js";
import { type FreshStore, LawBench } from "./laws/law-bench.js";
import { logbookLaws } from "./laws/logbook-laws.js";
import { nameLaws } from "./laws/name-laws.js";
import { paneLaws } from "./laws/pane-laws.js";
import { CLAIM, checkpoint } from "./store-parts.js";

/** What every engine must do; run for each of them. */
export function storeLaws(engine: string, fresh: () => Promise<FreshStore>): void {
  describe(`store on ${engine}`, () => {
    const bench = new LawBench(fresh);
    beforeEach(() => bench.open());
    afterEach(() => bench.close());

    ingestLaws(bench);
    paneLaws(bench);
    evaluationLaws(bench);
    baselineLaws(bench);
    logbookLaws(bench);
    nameLaws(bench);
    auditLaws(bench);

    it("says that it is closed once it was closed", async () => {
      const closed = await bench.another();
      await closed.close();
      await expect(closed.ping()).rejects.toMatchObject({ code: "MOORLINE_STATE_STORE_CLOSED" });
      await expect(closed.ingest.commitCheckpoint(checkpoint(0, 10))).rejects.toMatchObject({
        code: "MOORLINE_STATE_STORE_CLOSED",
      });
      await closed.close();
    });

    it("migrate again, and by several at once, changes nothing", async () => {
      await bench.store.ingest.claimPartition(CLAIM);
      const rival = await bench.another();
      await Promise.all([bench.store.migrate(), rival.migrate(), bench.store.migrate(), rival.migrate()]);
      expect(await bench.store.ingest.partitions("chill")).toHaveLength(1);
      await rival.ping();
    });
  });
}
