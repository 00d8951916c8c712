import { isoTime } from "../answers/feature-rows.js";
import * as answers from "./answer-schemas.js";
import { logbookQuery } from "./query-schemas.js";
import { json, route } from "./route.js";

export const LOGBOOK_ROUTES = [
  route({
    method: "get",
    path: "/v1/logbook",
    summary: "What happened, newest first",
    query: logbookQuery,
    answer: answers.logbook,
    types: ["application/json"],
    handle: async ({ store }, { query }) => {
      const { stream, kind, subject, from, to, before, limit } = query;
      const entries = await store.logbook.entries({
        limit,
        ...(stream === undefined ? {} : { stream }),
        ...(kind === undefined ? {} : { kind }),
        ...(subject === undefined ? {} : { subject }),
        ...(from === undefined ? {} : { fromMs: from }),
        ...(to === undefined ? {} : { toMs: to }),
        ...(before === undefined ? {} : { beforeId: before }),
      });
      return json({ entries: entries.map(({ atMs, ...entry }) => ({ ...entry, at: isoTime(atMs) })) });
    },
  }),
];
