import type { FeatureSensitivity, SensitivityAnswer } from "@moorline/answers";
import { formatDuration } from "@moorline/config";
import type { Sensitivity, VisibleChange } from "@moorline/stats";
import { textTable, visible } from "../terminal/table.js";

/** A table a horizon: features down, kinds of change across; in each cell the quickest and the smallest that pages. */
export function sensitivityText(answer: SensitivityAnswer): string {
  const horizons = [...new Set(answer.features.map(({ horizon }) => horizon))];
  const parts = horizons.map((horizon) => {
    const rows = answer.features.filter((one) => one.horizon === horizon);
    const changes = [...new Set(rows.flatMap((row) => row.changes.map(({ change }) => change)))];
    const head = ["feature", "events", ...changes];
    const cells = rows.map((row) => [
      row.feature,
      row.eventsPerWindow.toLocaleString("en-US"),
      ...changes.map((change) => cellOf(row, change)),
    ]);
    return `horizon ${horizon}, slice ${visible(answer.slice)}\n${textTable(head, cells)}`;
  });
  return `${parts.join("\n")}\n${notesOf(answer)}`;
}

function cellOf(row: FeatureSensitivity, change: string): string {
  const found = row.changes.find((one) => one.change === change);
  const [quickest, smallest] = [found?.visible[0], found?.visible.at(-1)];
  if (found === undefined || quickest === undefined) return "never";
  const lines = [sizeIn(row, found, quickest)];
  if (smallest !== quickest) lines.push(sizeIn(row, found, smallest!));
  return lines.join(", ");
}

/** `0.42 °C in 15m`, `× 1.3 in 2h`; `any in 15m` where values repeat so much that the least move shows. */
function sizeIn(row: FeatureSensitivity, { kind }: Sensitivity, found: VisibleChange): string {
  const { size, inDeviations } = found;
  const time = formatDuration(found.windows * row.windowMs);
  if (kind === "share") return `${Number((size * 100).toPrecision(2))} % in ${time}`;
  const figure = Number(size.toPrecision(kind === "move" ? 2 : 3));
  if (kind === "factor") return figure === 1 ? `any in ${time}` : `× ${figure} in ${time}`;
  if (inDeviations !== null && inDeviations < LEAST_MOVE) return `any in ${time}`;
  return `${figure}${row.unit === null ? "" : ` ${visible(row.unit)}`} in ${time}`;
}

const LEAST_MOVE = 1e-6;

function notesOf({ power, features }: SensitivityAnswer): string {
  const lines = [
    `Sizes that make a feature adrift with a probability of ${power * 100} %: the quickest, then the smallest. Tails: beyond the baseline's p99 (p1).`,
  ];
  const names = (some: readonly FeatureSensitivity[]) =>
    [...new Set(some.map(({ feature }) => visible(feature)))].join(", ");
  const assumed = features.filter(({ tolerance }) => tolerance.basis === "assumed");
  if (assumed.length > 0)
    lines.push(
      `${names(assumed)}: the baseline has too few blocks; events are taken as independent, which is optimistic.`,
    );
  const byRows = features.filter(({ tolerance }) => tolerance.basis === "rows");
  if (byRows.length > 0) lines.push(`${names(byRows)}: how it varies was learnt from the order of the rows.`);
  const blind = features.filter(({ blindRanks }) => blindRanks.length > 0);
  if (blind.length > 0) {
    const ranks = [...new Set(blind.flatMap(({ blindRanks }) => blindRanks))].sort((a, b) => a - b);
    lines.push(
      `${names(blind)}: too few events ever lie beyond ${ranks.map((rank) => `p${Number((rank * 100).toPrecision(6))}`).join(", ")} to page there.`,
    );
  }
  if (features.some(({ eventsFrom }) => eventsFrom === "the baseline"))
    lines.push("No window is stored yet: events are those of the baseline. --events-per-window sets them.");
  lines.push("What is not seen here is not proof of safety.");
  return `${lines.join("\n")}\n`;
}
