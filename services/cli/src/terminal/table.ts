import CliTable from "cli-table3";

/** A plain table: no colours, no control characters. */
export function textTable(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const table = new CliTable({ head: [...head], style: { head: [], border: [], compact: true } });
  for (const row of rows) table.push(row.map(visible));
  return `${table.toString()}\n`;
}

/** A Markdown table; what would be markup in cells is escaped. */
export function markdownTable(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]) => `| ${cells.map(markdownText).join(" | ")} |`;
  return `${[line(head), line(head.map(() => "---")), ...rows.map(line)].join("\n")}\n`;
}

/** Text in Markdown: neither markup nor HTML of the data takes effect. Underscores within words are none and stay. */
export function markdownText(text: string): string {
  return visible(text)
    .replace(/[\\`*[\]<>|&]/g, "\\$&")
    .replace(/(?<!\p{L}|\p{N})_|_(?!\p{L}|\p{N})/gu, "\\_");
}

/** Names may come from data: control characters are made visible. */
export function visible(text: string): string {
  return text.replace(/\p{Cc}/gu, (c) => `\\x${c.charCodeAt(0).toString(16).padStart(2, "0")}`);
}
