import { FEED_PARTITIONS } from "./demo-folder.js";

export const DEMO_STREAM = "chill-risk";

/** The demo's moorline.yaml. Event time runs ahead of the clock, so its limits are wide. */
export function demoConfigText(): string {
  const files = Array.from({ length: FEED_PARTITIONS }, (_, partition) => `feed/part-${partition}.ndjson`);
  return `# Moorline's demo: refrigerated parcels between three depots, and a model that predicts whether a parcel will spoil.
# All of its data is invented. Event time runs at 60 times the clock: an hour passes each minute.
store: sqlite:./moorline.db
gateway: { port: 7460 }
collector: { checkpoint: 1s }
evaluator: { tick: 500ms }
streams:
  - name: ${DEMO_STREAM}
    source: { file: { paths: [${files.join(", ")}], deadLetters: feed/dead-letters.ndjson } }
    payload: { format: json, eventTime: measured_at }
    slices: [depot]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: °C }
      - { name: ambient_temp, path: ambient.temp, unit: °C }
      - { name: humidity, path: ambient.humidity, unit: "%" }
      - { name: door_openings, path: doors.openings }
      - { name: transit_hours, path: route.transit_hours, unit: h }
      - { name: dwell_minutes, path: route.dwell_minutes, unit: min }
      - { name: battery_volts, path: logger.battery, unit: V }
    pane: 1m
    horizons: [5m, 1h]
    lateness: 1m
    idleAfter: 20s
    silentAfter: 1m
    maxAhead: 36500d
    maxAge: null
`;
}
