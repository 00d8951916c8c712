import { configJsonSchema, type JsonSchemaNode } from "./json-schema.js";

let root: JsonSchemaNode | null = null;

/** The keys that the block at this place of the config may hold. */
export function knownKeysAt(path: readonly PropertyKey[]): string[] {
  root ??= configJsonSchema();
  let nodes: readonly JsonSchemaNode[] = branchesOf(root);
  for (const part of path) {
    nodes = nodes.flatMap((node) => {
      const next = typeof part === "number" ? node.items : node.properties?.[String(part)];
      return next === undefined ? [] : branchesOf(next);
    });
  }
  return nodes.flatMap((node) => Object.keys(node.properties ?? {}));
}

function branchesOf(node: JsonSchemaNode): readonly JsonSchemaNode[] {
  return node.anyOf ?? [node];
}
