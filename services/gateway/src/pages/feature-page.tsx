import type { PairsAnswer } from "@moorline/answers";
import { countText, numberText, QqPlot, rankText, ShiftPlot } from "@moorline/figures";
import type { VNode } from "preact";
import type { FeatureRow } from "../answers/feature-rows.js";
import { plotData, rangeText, shiftPlotData } from "../answers/plot-data.js";
import { featurePath, pairsPath } from "./links.js";
import { StateMark } from "./state-mark.js";
import { percentText, ratioText, timeText } from "./words.js";

export interface WhereAndWhen {
  readonly onset: string;
  /** Null for a stream without slices. */
  readonly slices: string | null;
}

export interface FeaturePageProps {
  readonly answer: PairsAnswer;
  /** Where the feature stands on each horizon, for the slice shown. */
  readonly rows: readonly FeatureRow[];
  readonly slices: readonly string[];
  /** Null where another range stands in place of the baseline. */
  readonly told: WhereAndWhen | null;
}

/** One feature: its states, its Q-Q plot over a range, and the pairs as a table. */
export function FeatureContent({ answer, rows, slices, told }: FeaturePageProps): VNode {
  const { stream, feature, slice } = answer;
  const range = {
    from: answer.window.from,
    to: answer.window.to,
    slice: slice === "all" ? undefined : slice,
  };
  return (
    <>
      <h1>{`${feature}${answer.unit === null ? "" : ` (${answer.unit})`}`}</h1>
      <p class="faint">{`of ${stream}, slice ${slice}, ${rangeText(answer.window)}${answer.amended ? ", amended by late events" : ""}`}</p>
      <p class="reading">{answer.reading}</p>
      {told === null ? null : <p>{`Since when: ${told.onset}.`}</p>}
      {told === null || told.slices === null ? null : <p>{`Which slice: ${told.slices}.`}</p>}
      <div class="plot">
        <QqPlot data={plotData(answer)} />
      </div>
      <div class="plot">
        <ShiftPlot data={shiftPlotData(answer)} />
      </div>
      <p>
        {"The same figures as "}
        <a href={pairsPath(stream, feature, range)}>JSON</a>
        {" (by Accept also CSV and SVG). To come back to exactly this range: "}
        <a href={featurePath(stream, feature, range)}>{rangeText(answer.window)}</a>.
      </p>
      <Figures answer={answer} />
      <HorizonTable stream={stream} feature={feature} slice={slice} rows={rows} />
      {slices.length < 2 ? null : <SliceLinks answer={answer} slices={slices} />}
      <PairsTable answer={answer} />
    </>
  );
}

function Figures({ answer }: { readonly answer: PairsAnswer }): VNode {
  const { ks, wasserstein, tails } = answer;
  const lines: readonly (readonly [string, string])[] = [
    ["Values", `${countText(answer.n.production)} live, ${countText(answer.n.baseline)} in the baseline`],
    [
      "Missing",
      `${percentText(answer.missing.production)} live, ${percentText(answer.missing.baseline)} in the baseline`,
    ],
    [
      "Kolmogorov–Smirnov distance",
      ks === null
        ? "too few values"
        : `${numberText(ks.distance)} at ${numberText(ks.at)}, production's CDF ${ks.direction}`,
    ],
    [
      "Wasserstein-1",
      wasserstein === null
        ? "too few values"
        : `${numberText(wasserstein.distance)}${answer.unit === null ? "" : ` ${answer.unit}`}, ${wasserstein.scaled === null ? "constant baseline" : `${numberText(wasserstein.scaled)} of the baseline's scale`}`,
    ],
    ...(["lower", "upper"] as const).map((tail) => {
      const found = tails?.[tail] ?? null;
      const [low, high] = found?.interval ?? [null, null];
      const interval =
        low === null || high === null ? "" : ` (95 % interval ${numberText(low)} to ${numberText(high)})`;
      const words =
        found === null
          ? "too few values"
          : `${ratioText(found.ratio)} the baseline's share beyond ${rankText(found.rank)} = ${numberText(found.threshold)}${interval}`;
      return [`${tail === "lower" ? "Lower" : "Upper"} tail`, words] as const;
    }),
    ...(["lower", "upper"] as const).flatMap((tail) =>
      (answer.tailRanks?.[tail] ?? []).map(
        ({ rank, sentence }) => [`Beyond ${rankText(rank)}`, sentence] as const,
      ),
    ),
    [
      "Held against",
      answer.baseline === null
        ? rangeText(answer.against!)
        : `baseline ${answer.baseline.id}, its slice ${answer.baseline.slice}`,
    ],
  ];
  return (
    <dl>
      {lines.map(([name, text]) => (
        <>
          <dt>{name}</dt>
          <dd>{text}</dd>
        </>
      ))}
    </dl>
  );
}

interface HorizonTableProps {
  readonly stream: string;
  readonly feature: string;
  readonly slice: string;
  readonly rows: readonly FeatureRow[];
}

function HorizonTable({ stream, feature, slice, rows }: HorizonTableProps): VNode | null {
  if (rows.length === 0) return null;
  return (
    <div class="scroll">
      <table>
        <caption>Where it stands on each horizon</caption>
        <thead>
          <tr>
            <th scope="col">Horizon</th>
            <th scope="col">State</th>
            <th scope="col">Since (event time)</th>
            <th scope="col">Reading of the last window</th>
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={row.horizon}>
              <td>
                <a
                  href={featurePath(stream, feature, {
                    slice: slice === "all" ? undefined : slice,
                    horizon: row.horizon,
                  })}
                >
                  {row.horizon}
                </a>
              </td>
              <td>
                <StateMark state={row.state} />
              </td>
              <td>{timeText(row.since)}</td>
              <td class="told">{row.reading}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

function SliceLinks({
  answer,
  slices,
}: {
  readonly answer: PairsAnswer;
  readonly slices: readonly string[];
}): VNode {
  return (
    <nav aria-label="Slices">
      <h2>Slices</h2>
      <ul>
        {slices.map((one) => (
          <li key={one}>
            <a
              href={featurePath(answer.stream, answer.feature, {
                ...answer.window,
                slice: one === "all" ? undefined : one,
              })}
              aria-current={one === answer.slice ? "true" : undefined}
            >
              {one}
            </a>
          </li>
        ))}
      </ul>
    </nav>
  );
}

function PairsTable({ answer }: { readonly answer: PairsAnswer }): VNode {
  const cell = (value: number | null) => (value === null ? "beyond data" : numberText(value));
  return (
    <details>
      <summary>Quantile pairs as a table</summary>
      <div class="scroll">
        <table>
          <caption>{`Band 99.9 %, all ranks together${answer.unit === null ? "" : `; in ${answer.unit}`}`}</caption>
          <thead>
            <tr>
              <th scope="col">Rank</th>
              <th scope="col" class="number">
                {answer.baseline === null ? "Other range" : "Baseline"}
              </th>
              <th scope="col" class="number">
                Production
              </th>
              <th scope="col" class="number">
                Band from
              </th>
              <th scope="col" class="number">
                to
              </th>
            </tr>
          </thead>
          <tbody>
            {answer.pairs.map((pair) => (
              <tr key={pair.rank}>
                <td>{rankText(pair.rank)}</td>
                <td class="number">{cell(pair.baseline)}</td>
                <td class="number">{cell(pair.production)}</td>
                <td class="number">{pair.low === null ? "open" : numberText(pair.low)}</td>
                <td class="number">{pair.high === null ? "open" : numberText(pair.high)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </details>
  );
}
