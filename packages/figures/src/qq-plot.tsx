import type { VNode } from "preact";
import { numberText, rankText } from "./number-text.js";
import { markerKind, QqMarker } from "./qq-marker.js";
import { AXIS_WORDS, type AxisKind, chooseAxis, type ValueScale, valueScale } from "./value-scale.js";

/** One quantile pair; a value is null where the data do not reach that rank. */
export interface PlottedPair {
  readonly rank: number;
  readonly baseline: number | null;
  readonly production: number | null;
  readonly low: number | null;
  readonly high: number | null;
}

export interface QqPlotData {
  /** Shown as text, whatever it is. */
  readonly feature: string;
  readonly unit: string | null;
  readonly pairs: readonly PlottedPair[];
  readonly n: { readonly baseline: number; readonly production: number };
  /** What the figure was computed from, in words: window, slice, baseline. */
  readonly provenance: string;
  /** Default: chosen from the values. */
  readonly axis?: AxisKind;
  /** What stands on the horizontal axis: `baseline`, or the other range. Default `baseline`. */
  readonly against?: string;
}

const WIDTH = 640;
const HEIGHT = 600;
const MARGIN = { left: 74, right: 40, top: 24, bottom: 92 } as const;
const LABELLED = new Set([0.01, 0.05, 0.25, 0.5, 0.75, 0.95, 0.99, 0.999]);

export interface QqPlotProps {
  readonly data: QqPlotData;
  /** True: the drawing brings its style; a page has it in its own style sheet, which a strict content policy asks for. */
  readonly standalone?: boolean;
}

interface DrawnPair extends PlottedPair {
  readonly baseline: number;
  readonly production: number;
}

/**
 * A two-sample Q-Q plot: baseline quantiles across, production quantiles up, the line on which both agree, and the simultaneous band around
 * production's quantiles. Where the line leaves the band the two differ by more than chance: those marks are filled, the others hollow. The tails have
 * marks of their own, so nothing is told by colour alone.
 */
export function QqPlot({ data, standalone = false }: QqPlotProps): VNode {
  const pairs = data.pairs.filter(
    (pair): pair is DrawnPair => pair.baseline !== null && pair.production !== null,
  );
  const title = `Q-Q plot of ${data.feature}`;
  if (pairs.length === 0)
    return <EmptyPlot title={title} provenance={data.provenance} standalone={standalone} />;
  const values = pairs.flatMap((pair) => [pair.baseline, pair.production]);
  const kind = data.axis ?? chooseAxis(values);
  const x = valueScale(values, kind, [MARGIN.left, WIDTH - MARGIN.right]);
  const y = valueScale(values, kind, [HEIGHT - MARGIN.bottom, MARGIN.top]);
  return (
    <svg
      xmlns="http://www.w3.org/2000/svg"
      viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
      role="img"
      class="moorline-figure"
    >
      <title>{title}</title>
      <desc>{description(pairs, data)}</desc>
      {standalone ? <style>{FIGURE_STYLE}</style> : null}
      <rect class="paper" width={WIDTH} height={HEIGHT} />
      <Axes x={x} y={y} data={data} />
      <Band pairs={pairs} x={x} y={y} />
      <ReferenceLine x={x} y={y} values={values} />
      {pairs.map((pair) => (
        <QqMarker key={pair.rank} pair={pair} x={x.at(pair.baseline)} y={y.at(pair.production)} />
      ))}
      <RankLabels pairs={pairs} x={x} y={y} />
      <text
        class="note"
        x={MARGIN.left}
        y={HEIGHT - 30}
      >{`${AXIS_WORDS[kind]}; band 99.9 %, all ranks together; filled mark: the line lies outside the band`}</text>
      <text class="note" x={MARGIN.left} y={HEIGHT - 12}>
        {data.provenance}
      </text>
    </svg>
  );
}

/** Follows the reader's light or dark; a page may set the custom properties itself. */
export const FIGURE_STYLE = `
.moorline-figure { font-family: system-ui, "DejaVu Sans", sans-serif; font-size: 12px;
  --f-paper: var(--paper, #fdfcf9); --f-ink: var(--ink, #20262b); --f-faint: var(--faint, #6a737a); --f-band: var(--band, #cfd8dc); --f-mark: var(--mark, #0b5c7a); }
@media (prefers-color-scheme: dark) { .moorline-figure { --f-paper: var(--paper, #14191c); --f-ink: var(--ink, #e6e9ea); --f-faint: var(--faint, #9aa5ab);
  --f-band: var(--band, #36434a); --f-mark: var(--mark, #7cc4de); } }
.moorline-figure .paper { fill: var(--f-paper); }
.moorline-figure text { fill: var(--f-ink); }
.moorline-figure .note, .moorline-figure .tick { fill: var(--f-faint); }
.moorline-figure .grid { stroke: var(--f-band); stroke-width: 0.5; }
.moorline-figure .band { fill: var(--f-band); opacity: 0.75; }
.moorline-figure .line { stroke: var(--f-ink); stroke-width: 1; stroke-dasharray: 5 4; fill: none; }
.moorline-figure .mark { stroke: var(--f-mark); stroke-width: 1.6; fill: var(--f-paper); }
.moorline-figure .mark.outside { fill: var(--f-mark); }
`;

function description(pairs: readonly DrawnPair[], data: QqPlotData): string {
  const outside = pairs.filter((pair) => markerKind(pair).outside).map((pair) => rankText(pair.rank));
  const where =
    outside.length === 0
      ? "The line of equality stays within the band."
      : `Differences beyond the band: ${outside.join(", ")}.`;
  return `${pairs.length} quantile pairs of ${data.n.baseline} baseline and ${data.n.production} production values. ${where} ${data.provenance}`;
}

interface Scales {
  readonly x: ValueScale;
  readonly y: ValueScale;
}

function Axes({ x, y, data }: Scales & { readonly data: QqPlotData }): VNode {
  const unit = data.unit === null ? "" : ` (${data.unit})`;
  const [bottom, right] = [HEIGHT - MARGIN.bottom, WIDTH - MARGIN.right];
  const middle = (MARGIN.top + bottom) / 2;
  return (
    <g>
      {x.ticks.map((tick) => (
        <g key={`x${tick}`}>
          <line class="grid" x1={x.at(tick)} x2={x.at(tick)} y1={MARGIN.top} y2={bottom} />
          <text class="tick" x={x.at(tick)} y={bottom + 16} text-anchor="middle">
            {numberText(tick)}
          </text>
        </g>
      ))}
      {y.ticks.map((tick) => (
        <g key={`y${tick}`}>
          <line class="grid" x1={MARGIN.left} x2={right} y1={y.at(tick)} y2={y.at(tick)} />
          <text class="tick" x={MARGIN.left - 8} y={y.at(tick) + 4} text-anchor="end">
            {numberText(tick)}
          </text>
        </g>
      ))}
      <text x={(MARGIN.left + right) / 2} y={bottom + 36} text-anchor="middle">
        {`${data.against ?? "baseline"} quantile${unit}, n = ${numberText(data.n.baseline)}`}
      </text>
      <text x={18} y={middle} text-anchor="middle" transform={`rotate(-90 18 ${middle})`}>
        {`production quantile${unit}, n = ${numberText(data.n.production)}`}
      </text>
    </g>
  );
}

/** Where the band runs out of the data it is open: drawn to the edge of the frame. */
function Band({ pairs, x, y }: Scales & { readonly pairs: readonly DrawnPair[] }): VNode | null {
  const known = pairs.filter((pair) => pair.low !== null || pair.high !== null);
  if (known.length < 2) return null;
  const [top, bottom] = [MARGIN.top, HEIGHT - MARGIN.bottom];
  const inFrame = (value: number | null, open: number) =>
    value === null ? open : Math.min(bottom, Math.max(top, y.at(value)));
  const point = (pair: DrawnPair, at: number) => `${round(x.at(pair.baseline))},${round(at)}`;
  const upper = known.map((pair) => point(pair, inFrame(pair.high, top)));
  const lower = known.toReversed().map((pair) => point(pair, inFrame(pair.low, bottom)));
  return <polygon class="band" points={[...upper, ...lower].join(" ")} />;
}

function ReferenceLine({ x, y, values }: Scales & { readonly values: readonly number[] }): VNode {
  const [least, most] = [Math.min(...values), Math.max(...values)];
  return <line class="line" x1={x.at(least)} y1={y.at(least)} x2={x.at(most)} y2={y.at(most)} />;
}

/** Labels stand where they do not lie on one another; the tails come first, for they are what is looked for. */
function RankLabels({ pairs, x, y }: Scales & { readonly pairs: readonly DrawnPair[] }): VNode {
  const placed: { readonly x: number; readonly y: number }[] = [];
  const labelled = pairs
    .filter((pair) => LABELLED.has(pair.rank))
    .toSorted((a, b) => Math.abs(b.rank - 0.5) - Math.abs(a.rank - 0.5))
    .flatMap((pair) => {
      const at = { x: x.at(pair.baseline), y: y.at(pair.production) };
      if (placed.some((other) => Math.abs(other.x - at.x) < 34 && Math.abs(other.y - at.y) < 14)) return [];
      placed.push(at);
      return [{ pair, at }];
    });
  return (
    <g>
      {labelled.map(({ pair, at }) => {
        const above = pair.production >= pair.baseline;
        const anchor = above === at.x > WIDTH - 90 ? "end" : above ? "end" : "start";
        return (
          <text
            key={pair.rank}
            x={at.x + (anchor === "end" ? -9 : 9)}
            y={at.y + (above ? -6 : 14)}
            text-anchor={anchor}
          >
            {rankText(pair.rank)}
          </text>
        );
      })}
    </g>
  );
}

function EmptyPlot(props: {
  readonly title: string;
  readonly provenance: string;
  readonly standalone: boolean;
}): VNode {
  const { title, provenance, standalone } = props;
  return (
    <svg xmlns="http://www.w3.org/2000/svg" viewBox={`0 0 ${WIDTH} 120`} role="img" class="moorline-figure">
      <title>{title}</title>
      {standalone ? <style>{FIGURE_STYLE}</style> : null}
      <rect class="paper" width={WIDTH} height={120} />
      <text x={WIDTH / 2} y={52} text-anchor="middle">
        too few values for a quantile pair
      </text>
      <text class="note" x={WIDTH / 2} y={78} text-anchor="middle">
        {provenance}
      </text>
    </svg>
  );
}

function round(at: number): number {
  return Math.round(at * 100) / 100;
}
