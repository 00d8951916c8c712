import type { Kysely, Transaction } from "kysely";
import { checkNames } from "./check-names.js";
import type { Tables } from "./schema.js";
import type { EvaluationStore, Lease } from "./store.js";

/**
 * Leadership by lease. The token grows each time a lease is taken anew, and a writer is let in by its token (`holdLease`), not by
 * the time: a leader that slept through its lease writes nothing once another one leads, whatever the clocks say.
 */
export function leases(db: Kysely<Tables>): Pick<EvaluationStore, "acquireLease" | "releaseLease"> {
  return {
    acquireLease: async (name, owner, nowMs, ttlMs) => {
      checkNames([name]);
      const row = await db
        .insertInto("lease")
        .values({ name, owner, token: 1, expires_at_ms: nowMs + ttlMs })
        .onConflict((conflict) =>
          conflict
            .column("name")
            .doUpdateSet((eb) => ({
              owner,
              token: eb
                .case()
                .when(eb.and([eb("lease.owner", "=", owner), eb("lease.expires_at_ms", ">", nowMs)]))
                .then(eb.ref("lease.token"))
                .else(eb("lease.token", "+", 1))
                .end(),
              expires_at_ms: nowMs + ttlMs,
            }))
            .where((eb) => eb.or([eb("lease.owner", "=", owner), eb("lease.expires_at_ms", "<=", nowMs)])),
        )
        .returning("token")
        .executeTakeFirst();
      return row === undefined ? null : { name, owner, token: row.token };
    },

    // The token grows here too: what the old leader still has in hand is refused from now on.
    releaseLease: async (lease) => {
      await db
        .updateTable("lease")
        .set((eb) => ({ expires_at_ms: 0, token: eb("token", "+", 1) }))
        .where("name", "=", lease.name)
        .where("owner", "=", lease.owner)
        .where("token", "=", lease.token)
        .execute();
    },
  };
}

/** Is the lease still its owner's? If so its row is locked until the transaction ends, so that nobody takes it meanwhile. */
export async function holdLease(transaction: Transaction<Tables>, lease: Lease): Promise<boolean> {
  const held = await transaction
    .updateTable("lease")
    .set((eb) => ({ token: eb.ref("token") }))
    .where("name", "=", lease.name)
    .where("owner", "=", lease.owner)
    .where("token", "=", lease.token)
    .executeTakeFirst();
  return held.numUpdatedRows > 0n;
}
