/** A name as SQL writes it. */
export function sqlName(name: string): string {
  return `"${name.replaceAll('"', '""')}"`;
}

/** A text as SQL writes it. */
export function sqlText(text: string): string {
  return `'${text.replaceAll("'", "''")}'`;
}
