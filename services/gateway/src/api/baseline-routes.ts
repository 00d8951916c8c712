import { findBaseline } from "@moorline/baseline";
import { MoorlineError } from "@moorline/errors";
import type { BaselineRecord } from "@moorline/store";
import { isoTime } from "../answers/feature-rows.js";
import { streamOf } from "../gateway-context.js";
import * as answers from "./answer-schemas.js";
import { activateBody, idParams, streamParams } from "./query-schemas.js";
import { json, route } from "./route.js";

export const BASELINE_ROUTES = [
  route({
    method: "get",
    path: "/v1/streams/{stream}/baselines",
    summary: "The baselines of a stream, newest first",
    params: streamParams,
    answer: answers.baselineList,
    types: ["application/json"],
    handle: async (context, { params }) => {
      const stream = streamOf(context, params.stream).name;
      const [baselines, active] = await Promise.all([
        context.store.baselines.list(stream),
        context.store.baselines.active(stream),
      ]);
      return json({ stream, baselines: baselines.map((record) => listed(record, active?.baselineId)) });
    },
  }),
  route({
    method: "get",
    path: "/v1/baselines/{id}",
    summary: "One baseline with its manifest: source, rows, thresholds, atoms",
    params: idParams,
    answer: answers.baselineDetail,
    types: ["application/json"],
    handle: async ({ store }, { params }) => {
      const record = await store.baselines.get(params.id);
      if (record === null)
        throw new MoorlineError("MOORLINE_STATE_UNKNOWN_BASELINE", { stream: "any", id: params.id });
      const active = await store.baselines.active(record.stream);
      return json({ ...listed(record, active?.baselineId), manifest: record.manifest });
    },
  }),
  route({
    method: "put",
    path: "/v1/streams/{stream}/active-baseline",
    summary: "Makes a baseline the active one; it stands in the logbook",
    params: streamParams,
    body: activateBody,
    answer: answers.baselineDetail,
    types: ["application/json"],
    changes: true,
    handle: async (context, { params, body }) => {
      const stream = streamOf(context, params.stream).name;
      const record = await findBaseline(context.store, stream, body.baseline);
      await context.store.baselines.activate(stream, record.id, body.by, context.nowMs());
      return json({ ...listed(record, record.id), manifest: record.manifest });
    },
  }),
];

function listed(record: BaselineRecord, activeId: string | undefined) {
  return {
    id: record.id,
    stream: record.stream,
    createdAt: isoTime(record.createdAtMs),
    createdBy: record.createdBy,
    note: record.note,
    active: record.id === activeId,
  };
}
