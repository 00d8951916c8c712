import { type PairsAnswer, readOnset, readPairs, readSlices } from "@moorline/answers";
import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import { qqPlotSvg } from "@moorline/figures";
import { pairsRequest } from "../answers/pairs-request.js";
import { plotData } from "../answers/plot-data.js";
import { timelinePoints } from "../answers/timeline-points.js";
import { featureOf, streamOf } from "../gateway-context.js";
import { csvText } from "../http/csv.js";
import * as answers from "./answer-schemas.js";
import { CAUTION } from "./caution.js";
import { featureParams, onsetQuery, pairsQuery, slicesQuery, timelineQuery } from "./query-schemas.js";
import { json, route } from "./route.js";

const DAY_MS = 86_400_000;

export const FEATURE_ROUTES = [
  route({
    method: "get",
    path: "/v1/streams/{stream}/features/{feature}/quantile-pairs",
    summary: "Quantile pairs of any range against a baseline or another range, with band and statistics",
    params: featureParams,
    query: pairsQuery,
    answer: answers.pairsAnswer,
    types: ["application/json", "text/csv", "image/svg+xml"],
    handle: async (context, { params, query, accepts }) => {
      const stream = streamOf(context, params.stream);
      const answer = await readPairs(await pairsRequest(context, stream, params.feature, query));
      const fileName = `quantile-pairs-${params.feature}`;
      if (accepts === "text/csv")
        return { type: accepts, body: pairsCsv(answer), fileName: `${fileName}.csv` };
      if (accepts === "image/svg+xml") {
        return { type: accepts, body: qqPlotSvg(plotData(answer)), fileName: `${fileName}.svg` };
      }
      return json({ ...answer, caution: CAUTION });
    },
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}/features/{feature}/slices",
    summary: "Which slice carries the change of a range: parts of the Wasserstein distance that sum to it",
    params: featureParams,
    query: slicesQuery,
    answer: answers.slices,
    types: ["application/json"],
    handle: async (context, { params, query }) => {
      const stream = streamOf(context, params.stream);
      const { key, ...rest } = query;
      const request = await pairsRequest(context, stream, params.feature, rest);
      return json({ ...(await readSlices({ ...request, key: keyOf(stream, key) })), caution: CAUTION });
    },
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}/features/{feature}/onset",
    summary: "Since when a feature is different from its baseline, with an interval",
    params: featureParams,
    query: onsetQuery,
    answer: answers.onset,
    types: ["application/json"],
    handle: async (context, { params, query }) => {
      const stream = streamOf(context, params.stream);
      const isGiven = query.from !== undefined || query.to !== undefined;
      const request = await pairsRequest(context, stream, params.feature, query);
      const answer = await readOnset({ ...request, range: isGiven ? request.range : null });
      return json({ ...answer, caution: CAUTION });
    },
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}/features/{feature}/timeline",
    summary: "Every evaluated window of a range with its figures and state",
    params: featureParams,
    query: timelineQuery,
    answer: answers.timeline,
    types: ["application/json"],
    handle: async (context, { params, query }) => {
      const stream = streamOf(context, params.stream);
      const feature = featureOf(stream, params.feature).name;
      const slice = query.slice ?? "all";
      const progress = await context.store.evaluations.progress(stream.name);
      const toMs = query.to ?? progress?.closedThroughMs ?? context.nowMs();
      const fromMs = query.from ?? toMs - DAY_MS;
      const points = await timelinePoints(
        context.store,
        { stream: stream.name, feature, slice, fromMs, toMs },
        query.horizon,
      );
      return json({ stream: stream.name, feature, slice, points });
    },
  }),
];

/** @throws MOORLINE_INPUT_QUERY when the stream has no such slice key */
function keyOf(stream: StreamConfig, key: string | undefined): string | null {
  if (key === undefined) return null;
  if (stream.slices.some((one) => one.key === key)) return key;
  const keys = stream.slices.map((one) => one.key).join(", ");
  throw new MoorlineError("MOORLINE_INPUT_QUERY", { reason: `key ${key} is none of ${keys || "none"}` });
}

/** One row a pair; what it was computed from stands in every row, so that a row torn out of the table still says it. */
function pairsCsv(answer: PairsAnswer): string {
  const { stream, feature, slice, window, n } = answer;
  const against = answer.baseline?.id ?? `${answer.against?.from}..${answer.against?.to}`;
  const header = [
    ...[
      "stream",
      "feature",
      "slice",
      "from",
      "to",
      "against",
      "n_baseline",
      "n_production",
      "amended",
      "generated_at",
    ],
    ...["rank", "baseline", "production", "low", "high"],
  ];
  const rows = answer.pairs.map((pair) => [
    ...[stream, feature, slice, window.from, window.to, against, n.baseline, n.production, answer.amended],
    ...[answer.generatedAt, pair.rank, pair.baseline, pair.production, pair.low, pair.high],
  ]);
  return csvText(header, rows);
}
