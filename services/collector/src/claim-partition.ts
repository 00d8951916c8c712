import type { PartitionClaim, PartitionKey, Store } from "@moorline/store";
import type { PartitionOpening } from "./source.js";

export interface ClaimRequest {
  readonly key: PartitionKey;
  readonly opening: PartitionOpening;
  readonly owner: string;
  readonly atMs: number;
}

export interface ClaimedPartition {
  readonly claim: PartitionClaim;
  readonly maxEventMs: number | null;
  /** Why the log is not the one that was read, or null. */
  readonly rewound: string | null;
  /** Why nothing may be read though the log is the same, or null. */
  readonly halted: string | null;
}

/** Claims a partition in the store and holds what the store knows of it against what the source offers. */
export async function claimPartition(store: Store, request: ClaimRequest): Promise<ClaimedPartition> {
  const { key, opening, owner, atMs } = request;
  const { startOffset, sourceId, endOffset } = opening;
  const claim = await store.ingest.claimPartition({ ...key, owner, startOffset, sourceId, atMs });
  const rewound = await rewoundReason(claim, opening);
  if (rewound === null && claim.status === "finished" && endOffset > claim.nextOffset) {
    await store.ingest.setPartitionStatus(key, claim.epoch, "reading", "more was added to it", atMs);
  }
  const rows = await store.ingest.partitions(key.stream);
  const row = rows.find((r) => r.topic === key.topic && r.partition === key.partition);
  const stopped = claim.status === "log-rewound" || claim.status === "halted";
  return {
    claim,
    maxEventMs: row?.maxEventMs ?? null,
    rewound,
    halted: stopped ? `it is marked ${claim.status} in the store` : null,
  };
}

async function rewoundReason(claim: PartitionClaim, opening: PartitionOpening): Promise<string | null> {
  const { sourceId, isSameSource, endOffset } = opening;
  const same = isSameSource === undefined ? claim.sourceId === sourceId : await isSameSource(claim.sourceId);
  if (!same) return `it was read from ${claim.sourceId} and is now ${sourceId}`;
  if (endOffset >= claim.nextOffset) return null;
  return `the log ends at ${endOffset}, before offset ${claim.nextOffset} that was read already`;
}
