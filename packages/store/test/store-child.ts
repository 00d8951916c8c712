import { openStore } from "../src/index.js";
import { CLAIM, checkpoint, segment } from "./store-parts.js";

/**
 * A process that does one thing to a store and says so: `claim` migrates and claims once; `write` claims and commits checkpoints until
 * it is killed, saying each next offset when its commit was acknowledged.
 */
const [, , job, path] = process.argv;
const store = await openStore({ kind: "sqlite", path: path! });
const claim = await store.ingest.claimPartition(CLAIM);

if (job === "claim") {
  process.stdout.write(`${claim.epoch}\n`);
  await store.close();
} else {
  let at = claim.nextOffset;
  const features = Array.from({ length: 40 }, (_, index) => `feature-${index}`);
  for (;;) {
    const segments = Array.from({ length: 6 }, (_, pane) => segment("all", 10, pane * 60_000, features));
    const written = await store.ingest.commitCheckpoint(
      checkpoint(at, 60, { epoch: claim.epoch, segments, atMs: at }),
    );
    if (written.outcome !== "committed") throw new Error(`fenced at ${at}`);
    at += 60;
    process.stdout.write(`${at}\n`);
  }
}
