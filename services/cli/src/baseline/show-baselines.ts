import { type BaselineManifest, type BaselineSource, findBaseline, manifestOf } from "@moorline/baseline";
import { MoorlineError } from "@moorline/errors";
import type { BaselineRecord, Store } from "@moorline/store";
import { textTable, visible } from "../terminal/table.js";

/** The baselines of a stream as a table, or as JSON (a contract: fields are only ever added). */
export async function listBaselines(store: Store, stream: string, format: "table" | "json"): Promise<string> {
  const records = await store.baselines.list(stream);
  const active = await store.baselines.active(stream);
  if (format === "json") {
    const listed = records.map((record) => summaryOf(record, active?.baselineId === record.id));
    return `${JSON.stringify(listed)}\n`;
  }
  if (records.length === 0)
    return `${stream} has no baseline; set one: moorline baseline set --stream ${stream} --from FILE\n`;
  const rows = records.map((record) => {
    const manifest = manifestOf(record);
    return [
      record.id.slice(0, SHOWN_ID),
      active?.baselineId === record.id ? "active" : "",
      isoMinutes(record.createdAtMs),
      record.createdBy,
      manifest.rows.toLocaleString("en-US"),
      sourceText(manifest.source),
      record.note,
    ];
  });
  return textTable(["id", "", "set at", "by", "rows", "from", "note"], rows);
}

const SHOWN_ID = 12;

/** One baseline in full. */
export async function describeBaseline(
  store: Store,
  show: { readonly stream: string; readonly id: string | null; readonly format: "text" | "json" },
): Promise<string> {
  const active = await store.baselines.active(show.stream);
  const id = show.id ?? active?.baselineId;
  if (id === undefined)
    throw new MoorlineError("MOORLINE_STATE_BASELINE_NOT_ACTIVE", { stream: show.stream });
  const record = await findBaseline(store, show.stream, id);
  const isActive = active?.baselineId === record.id;
  if (show.format === "json") {
    return `${JSON.stringify({ ...summaryOf(record, isActive), manifest: record.manifest })}\n`;
  }
  return textOf(record, manifestOf(record), isActive);
}

function summaryOf(record: BaselineRecord, isActive: boolean): object {
  const { rows, source } = manifestOf(record);
  const { id, stream, createdBy, note } = record;
  return {
    id,
    stream,
    active: isActive,
    createdAt: new Date(record.createdAtMs).toISOString(),
    createdBy,
    note,
    rows,
    source,
  };
}

function textOf(record: BaselineRecord, manifest: BaselineManifest, isActive: boolean): string {
  const lines = [
    `baseline  ${record.id}${isActive ? " (active)" : ""}`,
    `stream    ${record.stream}`,
    `set       ${isoMinutes(record.createdAtMs)} by ${visible(record.createdBy)}${record.note === "" ? "" : `: ${visible(record.note)}`}`,
    `from      ${visible(sourceText(manifest.source))}, ${manifest.rows.toLocaleString("en-US")} rows`,
    `slices    ${manifest.slices.map(({ slice, rows }) => `${visible(slice)} (${rows})`).join(", ")}`,
    `blocks    ${manifest.blocks.sentence}`,
  ];
  if (manifest.leftOutSlices.length > 0) {
    const left = manifest.leftOutSlices.map(({ slice, rows }) => `${visible(slice)} (${rows})`);
    lines.push(`left out  ${left.join(", ")}: held against all`);
  }
  const thresholds = new Map(
    manifest.thresholds.filter((t) => t.slice === "all").map((t) => [t.feature, t.values]),
  );
  const rows = manifest.features.map((feature) => {
    const values = thresholds.get(feature.name) ?? [];
    const shown = [values[1], values[5], values[9]].map((value) =>
      value === undefined ? "–" : figure(value),
    );
    const counts = [feature.finite, feature.missing, feature.nonFinite].map((count) =>
      count.toLocaleString("en-US"),
    );
    const range = [feature.min, feature.max].map((value) => (value === null ? "–" : figure(value)));
    return [feature.name, feature.unit ?? "", feature.column, ...counts, range[0]!, ...shown, range[1]!];
  });
  const head = [
    "feature",
    "unit",
    "column",
    "finite",
    "missing",
    "not finite",
    "min",
    "p1",
    "p50",
    "p99",
    "max",
  ];
  return `${lines.join("\n")}\n${textTable(head, rows)}`;
}

function sourceText(source: BaselineSource): string {
  if (source.kind === "windows") {
    return `windows ${isoMinutes(source.fromMs)} to ${isoMinutes(source.toMs)} (${source.panes} panes)`;
  }
  return `${source.name}${source.files > 1 ? ` (${source.files} files)` : ""}, sha256 ${source.sha256.slice(0, SHOWN_ID)}`;
}

function isoMinutes(ms: number): string {
  return `${new Date(ms).toISOString().slice(0, 16)}Z`;
}

function figure(value: number): string {
  return String(Number(value.toPrecision(4)));
}
