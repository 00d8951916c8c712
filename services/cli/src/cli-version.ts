import { readFileSync } from "node:fs";

/** Of this program; kept in package.json alone. */
export function cliVersion(): string {
  const text = readFileSync(new URL("../package.json", import.meta.url), "utf8");
  return (JSON.parse(text) as { version: string }).version;
}
