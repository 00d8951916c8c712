import { beforeEach, describe, expect, it } from "vitest";
import type { Store } from "../../src/index.js";
import { entry } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function logbookLaws(bench: LawBench): void {
  describe("logbook", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    it("entries are newest first, filtered, and paged by id", async () => {
      const ids: number[] = [];
      for (let at = 0; at < 5; at++) ids.push(await store.logbook.append({ ...entry("temp"), atMs: at }));
      await store.logbook.append({ ...entry("hum"), stream: null, detail: undefined, atMs: 9 });

      const page = await store.logbook.entries({ subject: "temp", limit: 2 });
      expect(page.map((line) => line.id)).toEqual([ids[4], ids[3]]);
      const next = await store.logbook.entries({ subject: "temp", limit: 9, beforeId: page[1]!.id });
      expect(next.map((line) => line.atMs)).toEqual([2, 1, 0]);
      const timed = await store.logbook.entries({ stream: "chill", fromMs: 1, toMs: 3, limit: 9 });
      expect(timed.map((line) => line.atMs)).toEqual([2, 1]);
      const [newest] = await store.logbook.entries({ limit: 1 });
      expect(newest).toMatchObject({ stream: null, detail: null, subject: "hum" });
    });
  });
}
