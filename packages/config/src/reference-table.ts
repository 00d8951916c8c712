import { ENV_OVERRIDES } from "./env-overrides.js";
import { configJsonSchema, type JsonSchemaNode } from "./json-schema.js";

/** The tables of the README: every key with its type, default and meaning, and every environment variable. */
export function referenceTable(): string {
  const keys = keyRows(configJsonSchema(), "").map((cells) => `| ${cells.join(" | ")} |`);
  const variables = ENV_OVERRIDES.map((o) => `| \`${o.variable}\` | \`${o.key}\` | ${o.meaning} |`);
  return [
    "| key | type | default | meaning |",
    "|---|---|---|---|",
    ...keys,
    "",
    "| environment variable | stands in for | use |",
    "|---|---|---|",
    ...variables,
  ].join("\n");
}

function keyRows(node: JsonSchemaNode, prefix: string): string[][] {
  const required = new Set(node.required ?? []);
  return Object.entries(node.properties ?? {}).flatMap(([key, child]) => {
    const name = `${prefix}${key}`;
    const isNeeded = required.has(key);
    const row = [`\`${name}\``, typeOf(child), defaultOf(child, isNeeded), child.description ?? ""];
    return [row, ...nestedRows(child, name)];
  });
}

function nestedRows(node: JsonSchemaNode, name: string): string[][] {
  if (node.properties !== undefined) return keyRows(node, `${name}.`);
  const item = node.items;
  if (item?.properties !== undefined) return keyRows(item, `${name}[].`);
  return [];
}

function typeOf(node: JsonSchemaNode): string {
  if (node.title !== undefined) return node.title;
  if (node.enum !== undefined) return node.enum.map((value) => `\`${value}\``).join(" or ");
  if (node.anyOf !== undefined) return node.anyOf.map(typeOf).join(" or ");
  if (node.type === "array") return `list of ${typeOf(node.items ?? {})}`;
  if (node.type === "integer") return `whole number ${node.minimum} to ${node.maximum}`;
  if (node.type === "object") return "block";
  return TYPE_WORDS[node.type ?? ""] ?? "text";
}

const TYPE_WORDS: Readonly<Record<string, string>> = {
  number: "number",
  boolean: "`true` or `false`",
  null: "`null`",
};

function defaultOf(node: JsonSchemaNode, isNeeded: boolean): string {
  if (isNeeded) return "needed";
  const preset = node.default;
  if (preset === undefined || (typeof preset === "object" && preset !== null && !Array.isArray(preset)))
    return "";
  return `\`${typeof preset === "string" ? preset : JSON.stringify(preset)}\``;
}
