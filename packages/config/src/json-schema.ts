import { z } from "zod";
import { CONFIG_SCHEMA } from "./schema.js";

/** The part of JSON Schema that our config needs. */
export interface JsonSchemaNode {
  readonly type?: string;
  readonly title?: string;
  readonly description?: string;
  readonly default?: unknown;
  readonly enum?: readonly unknown[];
  readonly minimum?: number;
  readonly maximum?: number;
  readonly required?: readonly string[];
  readonly properties?: Readonly<Record<string, JsonSchemaNode>>;
  readonly items?: JsonSchemaNode;
  readonly anyOf?: readonly JsonSchemaNode[];
}

/** The JSON Schema of moorline.yaml, for editors; published as moorline.schema.json. */
export function configJsonSchema(): JsonSchemaNode {
  return z.toJSONSchema(CONFIG_SCHEMA, { io: "input", target: "draft-2020-12" }) as JsonSchemaNode;
}
