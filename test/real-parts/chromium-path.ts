import { NotToBeHad } from "./not-to-be-had.js";
import { onPath } from "./on-path.js";
import { took } from "./took.js";

/** Flags that keep Chromium quiet on a machine without a network; also needed to run it as root. */
export const CHROMIUM_FLAGS = [
  "--no-sandbox",
  "--disable-gpu",
  "--disable-quic",
  "--no-first-run",
  "--disable-background-networking",
  "--disable-component-update",
  "--disable-sync",
] as const;

export function chromiumPath(): string {
  const path = process.env["MOORLINE_TEST_CHROMIUM"] ?? onPath("chromium") ?? onPath("google-chrome");
  if (path === null)
    throw new NotToBeHad("Chromium", "install chromium, or set MOORLINE_TEST_CHROMIUM=/path/to/it");
  took("Chromium", path);
  return path;
}
