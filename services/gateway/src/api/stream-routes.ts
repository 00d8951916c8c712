import { readSensitivity } from "@moorline/answers";
import { featureRows } from "../answers/feature-rows.js";
import { streamSummary } from "../answers/stream-summary.js";
import { featureOf, streamOf } from "../gateway-context.js";
import * as answers from "./answer-schemas.js";
import { CAUTION } from "./caution.js";
import { featuresQuery, sensitivityQuery, streamParams } from "./query-schemas.js";
import { json, route } from "./route.js";

export const STREAM_ROUTES = [
  route({
    method: "get",
    path: "/v1/streams",
    summary: "Every stream with the health of its feed and how many of its features are in which state",
    answer: answers.streamList,
    types: ["application/json"],
    handle: async ({ config, store }) => {
      const streams = await Promise.all(config.streams.map((stream) => streamSummary(store, stream)));
      return json({ streams });
    },
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}",
    summary: "One stream",
    params: streamParams,
    answer: answers.streamSummary,
    types: ["application/json"],
    handle: async (context, { params }) =>
      json(await streamSummary(context.store, streamOf(context, params.stream))),
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}/features",
    summary: "Where each feature stands, by slice and horizon, worst first",
    params: streamParams,
    query: featuresQuery,
    answer: answers.featureList,
    types: ["application/json"],
    handle: async (context, { params, query }) => {
      const stream = streamOf(context, params.stream);
      const filter = Object.fromEntries(Object.entries(query).filter(([, value]) => value !== undefined));
      return json({ stream: stream.name, features: await featureRows(context.store, stream, filter) });
    },
  }),
  route({
    method: "get",
    path: "/v1/streams/{stream}/sensitivity",
    summary: "For each feature and horizon the smallest changes that would page, and how soon",
    params: streamParams,
    query: sensitivityQuery,
    answer: answers.sensitivity,
    types: ["application/json"],
    handle: async (context, { params, query }) => {
      const stream = streamOf(context, params.stream);
      const { feature, slice, baseline, eventsPerWindow } = query;
      const answer = await readSensitivity({
        store: context.store,
        stream,
        features: feature === undefined ? stream.features : [featureOf(stream, feature)],
        slice: slice ?? "all",
        baseline: baseline ?? null,
        eventsPerWindow: eventsPerWindow ?? null,
      });
      return json({ ...answer, caution: CAUTION });
    },
  }),
];
