import { relative } from "node:path";
import { DEMO_STREAM } from "./demo-config.js";
import type { DemoFolder } from "./demo-folder.js";

/** How the command is called from a checkout. */
const COMMAND = "npx --yes pnpm@10.34.9 --silent moorline";

/** Stands on every page of the demo. */
export const NOTICE =
  "This is the demo: all of its data is invented, and event time runs at 60 times the clock.";

export function welcome(): string {
  return `Moorline demo: refrigerated parcels between three depots, and a model that predicts whether a parcel will spoil.
All of this data is invented. Event time runs at 60 times the clock: an hour passes each minute.

`;
}

/** Where to look, once it answers. */
export function whereToLook(url: string, isTired: boolean): string {
  const tells = isTired
    ? "The compressors of depot north are tired: the upper tail of cargo_temp is heavier there."
    : "In about a minute the compressors of depot north tire: the upper tail of cargo_temp gets heavier there.";
  return `
  page       ${url}/
  features   ${url}/v1/streams/${DEMO_STREAM}/features
  pairs      ${url}/v1/streams/${DEMO_STREAM}/features/cargo_temp/quantile-pairs
  metrics    ${url}/metrics
  API        ${url}/v1/openapi.json

${tells} Ctrl-C stops.

`;
}

/** What to try once a feature is adrift. */
export function whatToTry(folder: DemoFolder, url: string): string {
  const near = relative(process.cwd(), folder.config);
  const config = near.startsWith("..") ? folder.config : near;
  return `
What to try next, in another terminal:
  ${COMMAND} pairs --config ${config} --feature cargo_temp --slice depot=north --from last-5m --to last
  ${COMMAND} audit --config ${config}
  ${COMMAND} baseline show --config ${config}
  ${COMMAND} rules --config ${config}
  curl '${url}/v1/logbook?stream=${DEMO_STREAM}'

`;
}

export function goodbye(events: number, nextMs: number): string {
  return `Stopped: ${events.toLocaleString("en-US")} events are counted, everything is written. The next start goes on from ${eventTime(nextMs)} event time.\n`;
}

/** `2026-05-01 12:34` in UTC. */
export function eventTime(ms: number): string {
  return new Date(ms).toISOString().slice(0, 16).replace("T", " ");
}
