import { scaleLinear } from "d3-scale";
import type { VNode } from "preact";
import { numberText, rankText } from "./number-text.js";
import { triangle } from "./qq-marker.js";
import { FIGURE_STYLE } from "./qq-plot.js";
import { AXIS_WORDS, chooseAxis, type ValueScale, valueScale } from "./value-scale.js";

/** How far production's quantile lies from the baseline's at one rank, and the simultaneous band around that. */
export interface PlottedShift {
  readonly rank: number;
  /** Null where the data do not reach that rank. */
  readonly difference: number | null;
  readonly low: number | null;
  readonly high: number | null;
}

export interface ShiftPlotData {
  /** Shown as text, whatever it is. */
  readonly feature: string;
  readonly unit: string | null;
  readonly shift: readonly PlottedShift[];
  /** What the figure was computed from, in words. */
  readonly provenance: string;
  /** What production is held against: `baseline`, or the other range. Default `baseline`. */
  readonly against?: string;
}

export interface ShiftPlotProps {
  readonly data: ShiftPlotData;
  /** As in `QqPlot`. */
  readonly standalone?: boolean;
}

interface DrawnShift extends PlottedShift {
  readonly difference: number;
}

interface Scales {
  readonly x: (rank: number) => number;
  readonly y: ValueScale;
}

const WIDTH = 640;
const HEIGHT = 360;
const MARGIN = { left: 74, right: 40, top: 24, bottom: 92 } as const;
const [LEFT, RIGHT, TOP, BOTTOM] = [MARGIN.left, WIDTH - MARGIN.right, MARGIN.top, HEIGHT - MARGIN.bottom];
const TICK_RANKS = [0.001, 0.01, 0.05, 0.25, 0.5, 0.75, 0.95, 0.99, 0.999];
const TAIL_RANK = 0.05;

/**
 * The shift function: ranks across, spread out toward both tails; up, what production's quantile is more than the baseline's; the band around it; the
 * line of no change. A mark whose band does not hold the line is filled.
 */
export function ShiftPlot({ data, standalone = false }: ShiftPlotProps): VNode {
  const points = data.shift.filter((point): point is DrawnShift => point.difference !== null);
  const title = `Shift function of ${data.feature}`;
  const height = points.length === 0 ? 120 : HEIGHT;
  return (
    <svg
      xmlns="http://www.w3.org/2000/svg"
      viewBox={`0 0 ${WIDTH} ${height}`}
      role="img"
      class="moorline-figure"
    >
      <title>{title}</title>
      {points.length === 0 ? null : <desc>{description(points, data)}</desc>}
      {standalone ? <style>{FIGURE_STYLE}</style> : null}
      <rect class="paper" width={WIDTH} height={height} />
      {points.length === 0 ? (
        <text x={WIDTH / 2} y={52} text-anchor="middle">
          too few values for a shift function
        </text>
      ) : (
        <Drawing points={points} data={data} />
      )}
      <text class="note" x={LEFT} y={height - 12}>
        {data.provenance}
      </text>
    </svg>
  );
}

function Drawing({
  points,
  data,
}: {
  readonly points: readonly DrawnShift[];
  readonly data: ShiftPlotData;
}): VNode {
  // Zero is always in view. The band may be far wider than the shift in the tails: it is cut at the frame rather than flattening the marks.
  const shown = [0, ...points.map((point) => point.difference), ...bodyBand(points)];
  const kind = chooseAxis(shown.filter((value) => value !== 0)) === "linear" ? "linear" : "symlog";
  const scales = { x: rankScale(), y: valueScale(shown, kind, [BOTTOM, TOP]) };
  return (
    <g>
      <Axes {...scales} data={data} />
      <Band {...scales} points={points} />
      <line class="line" x1={LEFT} x2={RIGHT} y1={scales.y.at(0)} y2={scales.y.at(0)} />
      {points.map((point) => (
        <ShiftMark
          key={point.rank}
          point={point}
          x={scales.x(point.rank)}
          y={scales.y.at(point.difference)}
        />
      ))}
      <text
        class="note"
        x={LEFT}
        y={HEIGHT - 30}
      >{`${AXIS_WORDS[kind]}; band 99.9 %, all ranks together; filled mark: 0 lies outside the band`}</text>
    </g>
  );
}

/** Logit of the rank: both tails as wide as the body. */
function rankScale(): (rank: number) => number {
  const logit = (rank: number) => Math.log(rank / (1 - rank));
  const scale = scaleLinear()
    .domain([logit(0.0008), logit(0.9992)])
    .range([LEFT, RIGHT]);
  return (rank) => scale(logit(rank));
}

function bodyBand(points: readonly DrawnShift[]): readonly number[] {
  return points
    .filter((point) => point.rank >= TAIL_RANK && point.rank <= 1 - TAIL_RANK)
    .flatMap((point) => [point.low, point.high])
    .filter((value) => value !== null);
}

function isOutside({ low, high }: PlottedShift): boolean {
  return (low !== null && low > 0) || (high !== null && high < 0);
}

function description(points: readonly DrawnShift[], data: ShiftPlotData): string {
  const outside = points.filter(isOutside);
  const unit = data.unit === null ? "" : ` ${data.unit}`;
  const where =
    outside.length === 0
      ? "No change stays within the band at every rank."
      : `Beyond the band: ${outside.map((point) => `${rankText(point.rank)} by ${numberText(point.difference)}${unit}`).join(", ")}.`;
  return `Production less ${data.against ?? "baseline"} at ${points.length} ranks. ${where} ${data.provenance}`;
}

function Axes({ x, y, data }: Scales & { readonly data: ShiftPlotData }): VNode {
  const unit = data.unit === null ? "" : ` (${data.unit})`;
  const middle = (TOP + BOTTOM) / 2;
  return (
    <g>
      {TICK_RANKS.map((rank) => (
        <g key={`x${rank}`}>
          <line class="grid" x1={round(x(rank))} x2={round(x(rank))} y1={TOP} y2={BOTTOM} />
          <text class="tick" x={round(x(rank))} y={BOTTOM + 16} text-anchor="middle">
            {rankText(rank)}
          </text>
        </g>
      ))}
      {y.ticks.map((tick) => (
        <g key={`y${tick}`}>
          <line class="grid" x1={LEFT} x2={RIGHT} y1={round(y.at(tick))} y2={round(y.at(tick))} />
          <text class="tick" x={LEFT - 8} y={round(y.at(tick) + 4)} text-anchor="end">
            {numberText(tick)}
          </text>
        </g>
      ))}
      <text x={(LEFT + RIGHT) / 2} y={BOTTOM + 36} text-anchor="middle">
        rank
      </text>
      <text x={18} y={middle} text-anchor="middle" transform={`rotate(-90 18 ${middle})`}>
        {`production less ${data.against ?? "baseline"}${unit}`}
      </text>
    </g>
  );
}

/** Where the band runs out of the data it is open: drawn to the edge of the frame. */
function Band({ points, x, y }: Scales & { readonly points: readonly DrawnShift[] }): VNode | null {
  const known = points.filter((point) => point.low !== null || point.high !== null);
  if (known.length < 2) return null;
  const inFrame = (value: number | null, open: number) =>
    value === null ? open : Math.min(BOTTOM, Math.max(TOP, y.at(value)));
  const corner = (point: DrawnShift, at: number) => `${round(x(point.rank))},${round(at)}`;
  const upper = known.map((point) => corner(point, inFrame(point.high, TOP)));
  const lower = known.toReversed().map((point) => corner(point, inFrame(point.low, BOTTOM)));
  return <polygon class="band" points={[...upper, ...lower].join(" ")} />;
}

function ShiftMark(props: { readonly point: DrawnShift; readonly x: number; readonly y: number }): VNode {
  const { point, x, y } = props;
  const outside = isOutside(point);
  const className = outside ? "mark outside" : "mark";
  const isTail = point.rank <= TAIL_RANK || point.rank >= 1 - TAIL_RANK;
  return (
    <g>
      <title>{`${rankText(point.rank)}: ${numberText(point.difference)}${outside ? ", beyond the band" : ""}`}</title>
      {isTail ? (
        <path class={className} d={triangle(x, y, point.rank > 0.5)} />
      ) : (
        <circle class={className} cx={round(x)} cy={round(y)} r={4} />
      )}
    </g>
  );
}

function round(at: number): number {
  return Math.round(at * 100) / 100;
}
