import { readFileSync } from "node:fs";

/** Of this program; kept in package.json alone. */
export const MOORLINE_VERSION: string = (
  JSON.parse(readFileSync(new URL("../package.json", import.meta.url), "utf8")) as { version: string }
).version;
