import type { Transaction } from "kysely";
import type { Engine } from "../engine/engine.js";
import type { Tables } from "../schema.js";

export type Migration = (transaction: Transaction<Tables>, types: Engine["types"]) => Promise<void>;
