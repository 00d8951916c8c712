import { findStream } from "@moorline/config";
import type { AuditReport } from "@moorline/store";
import type { Command } from "commander";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { configOf, withStore } from "../terminal/open-store.js";
import { textTable, visible } from "../terminal/table.js";

interface AuditOptions {
  readonly config?: string;
  readonly stream?: string;
  readonly format: string;
}

export function addAuditCommand(program: Command, io: CommandIo): void {
  program
    .command("audit")
    .summary("prove from the store that every event was counted once")
    .description(
      "Proves from the store alone that the offsets read of every partition tile without gap or overlap (invariant 1) and that every value is counted (invariant 2). Ends with 1 when something is wrong.",
    )
    .option("--stream <name>", "only this stream; default: every stream of the store")
    .option("--config <file>", "config file; default: moorline.yaml")
    .option("--format <format>", "text, json", "text")
    .action(async (options: AuditOptions) => {
      const format = oneOf("audit", "--format", options.format, ["text", "json"]);
      const config = configOf(io, options.config);
      if (options.stream !== undefined) findStream(config, options.stream);
      const report = await withStore(config, { create: false }, (store) => store.audit(options.stream));
      io.out(format === "json" ? `${JSON.stringify(report)}\n` : auditText(report));
      if (!report.clean) io.exitStatus = 1;
    });
}

const MOST_FINDINGS_SHOWN = 50;

function auditText(report: AuditReport): string {
  const head = ["stream", "partitions", "checkpoints", "segments", "events", "dead letters", "gaps"];
  const rows = report.streams.map((audited) => [
    audited.stream,
    ...[
      audited.partitions,
      audited.checkpoints,
      audited.segments,
      audited.events,
      audited.deadLetters,
      audited.gaps,
    ].map((count) => count.toLocaleString("en-US")),
  ]);
  const table = rows.length === 0 ? "nothing was collected yet\n" : textTable(head, rows);
  if (report.clean) return `${table}clean: every offset is counted once, every value is accounted for\n`;
  const shown = report.findings.slice(0, MOST_FINDINGS_SHOWN);
  const lines = shown.map(
    (f) => `invariant ${f.invariant}, ${visible(f.stream)}, ${visible(f.where)}: ${f.sentence}`,
  );
  const rest = report.findings.length - shown.length;
  const more = rest > 0 ? `\n… and ${rest} more (--format json has all)` : "";
  return `${table}not clean:\n${lines.join("\n")}${more}\n`;
}
