import { createHash } from "node:crypto";
import type { BaselinePart } from "@moorline/store";
import type { BaselineManifest } from "./baseline-manifest.js";

/**
 * The id of a baseline: SHA-256 of what it holds. Who set it, when, why and from which file are not part of it, nor is the name of the
 * column: the same rows in the same order give the same id, whatever the file format.
 */
export function contentId(
  stream: string,
  manifest: BaselineManifest,
  parts: readonly BaselinePart[],
): string {
  const { format, rows, features, slices, blocks, thresholds, atoms } = manifest;
  const content = {
    format,
    stream,
    rows,
    features: features.map(({ column: _, ...facts }) => facts),
    slices,
    blocks: { by: blocks.by, count: blocks.count, lengthMs: blocks.lengthMs, rowsEach: blocks.rowsEach },
    thresholds,
    atoms,
  };
  const hash = createHash("sha256").update(JSON.stringify(content));
  for (const { slice, feature, block, body } of parts) {
    hash.update(JSON.stringify([slice, feature, block, body.length])).update(body);
  }
  return hash.digest("hex");
}
