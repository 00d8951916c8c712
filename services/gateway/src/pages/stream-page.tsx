import { countText, numberText } from "@moorline/figures";
import type { VNode } from "preact";
import type { FeatureRow } from "../answers/feature-rows.js";
import type { StreamSummary } from "../answers/stream-summary.js";
import { featurePath, streamPath } from "./links.js";
import { StateMark } from "./state-mark.js";
import { ratioText, timeText, verdictText } from "./words.js";

/** The features of a stream for one slice: one row a feature, with the horizon on which it is worst. */
export function StreamSection({
  stream,
  rows,
  slice,
}: {
  readonly stream: StreamSummary;
  readonly rows: readonly FeatureRow[];
  readonly slice: string;
}): VNode {
  const worst = worstByFeature(rows);
  return (
    <section>
      <h2>{stream.name}</h2>
      <FeedLine stream={stream} />
      <SliceList stream={stream} slice={slice} />
      {worst.length === 0 ? (
        <p>
          No window was evaluated yet. The first follows when a pane has closed: its length and the lateness
          after its first event.
        </p>
      ) : (
        <div class="scroll">
          <FeatureTable stream={stream.name} rows={worst} slice={slice} />
        </div>
      )}
    </section>
  );
}

/** Rows come worst first, so the first of a feature is its worst. */
function worstByFeature(rows: readonly FeatureRow[]): readonly FeatureRow[] {
  const seen = new Set<string>();
  return rows.filter((row) => !seen.has(row.feature) && seen.add(row.feature));
}

/** The feed in one line: what was counted, what could not be, how far behind. */
function FeedLine({ stream }: { readonly stream: StreamSummary }): VNode {
  const { feed } = stream;
  const parts = [
    `${countText(feed.events)} events counted once from ${feed.partitions} ${feed.partitions === 1 ? "partition" : "partitions"}`,
    `${countText(feed.deadLetters)} dead-lettered`,
    `${countText(feed.lateEvents)} late`,
    feed.watermark === null ? "no watermark yet" : `watermark ${timeText(feed.watermark)}`,
    feed.evaluatedAt === null
      ? "never evaluated"
      : `last evaluation ${timeText(feed.evaluatedAt)} by the clock`,
    stream.activeBaseline === null
      ? "no baseline is active"
      : `baseline ${stream.activeBaseline.id.slice(0, 12)}`,
  ];
  return (
    <p class="faint">
      {parts.join(" · ")}
      {feed.halted.map((one) => (
        <strong
          key={`${one.topic}/${one.partition}`}
        >{` · ${one.topic}/${one.partition} is ${one.status}`}</strong>
      ))}
    </p>
  );
}

function SliceList({
  stream,
  slice,
}: {
  readonly stream: StreamSummary;
  readonly slice: string;
}): VNode | null {
  if (stream.slices.length < 2) return null;
  return (
    <nav aria-label={`Slices of ${stream.name}`}>
      <ul>
        {stream.slices.map((one) => (
          <li key={one}>
            <a href={streamPath(stream.name, one)} aria-current={one === slice ? "true" : undefined}>
              {one}
            </a>
          </li>
        ))}
      </ul>
    </nav>
  );
}

interface FeatureTableProps {
  readonly stream: string;
  readonly rows: readonly FeatureRow[];
  readonly slice: string;
}

function FeatureTable({ stream, rows, slice }: FeatureTableProps): VNode {
  return (
    <table class="features">
      <caption>{`Slice ${slice}, worst first; each feature on the horizon on which it is worst. Tail figures are multiples of the baseline's own share.`}</caption>
      <thead>
        <tr>
          <th scope="col">Feature</th>
          <th scope="col">State</th>
          <th scope="col">Reading</th>
          <th scope="col" class="number">
            Lower tail
          </th>
          <th scope="col" class="number">
            Upper tail
          </th>
          <th scope="col" class="number wide">
            KS
          </th>
          <th scope="col" class="number wide">
            Values
          </th>
          <th scope="col" class="wide">
            Since (event time)
          </th>
        </tr>
      </thead>
      <tbody>
        {rows.map((row) => (
          <tr key={row.feature}>
            <td class="name">
              <a
                href={featurePath(stream, row.feature, {
                  slice: slice === "all" ? undefined : slice,
                  horizon: row.horizon,
                })}
              >
                {row.feature}
              </a>
              {row.unit === null ? null : <span class="faint">{` ${row.unit}`}</span>}
            </td>
            <td>
              <StateMark state={row.state} /> <span class="faint">{row.horizon}</span>
            </td>
            <td class="reading-cell">{verdictText(row.reading)}</td>
            <td class="number" data-label="Lower tail">
              {ratioText(row.tailRatio.lower)}
            </td>
            <td class="number" data-label="Upper tail">
              {ratioText(row.tailRatio.upper)}
            </td>
            <td class="number wide">{row.ks === null ? "–" : numberText(row.ks, 3)}</td>
            <td class="number wide">{row.n === null ? "–" : countText(row.n)}</td>
            <td class="wide">
              {timeText(row.since)}
              {row.amended ? " (amended)" : ""}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
