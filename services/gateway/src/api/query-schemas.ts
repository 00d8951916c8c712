import { z } from "./z.js";

const LONGEST_NAME = 1_000;

/** ISO 8601 or epoch milliseconds, as epoch milliseconds. */
export const timePoint = z
  .string()
  .transform((text, context) => {
    const ms = /^-?\d{1,16}$/.test(text) ? Number(text) : Date.parse(text);
    if (Number.isFinite(ms) && Math.abs(ms) <= 8.64e15) return ms;
    context.addIssue({
      code: "custom",
      message: "is no time: give ISO 8601 with a time zone, or milliseconds since 1970",
    });
    return z.NEVER;
  })
  .openapi({
    type: "string",
    description: "ISO 8601 or milliseconds since 1970",
    example: "2026-12-01T10:00:00Z",
  });

/** `FROM..TO`. */
export const timeRange = z
  .string()
  .transform((text, context) => {
    const parts = text.split("..").map((part) => timePoint.safeParse(part));
    const [from, to] = parts.map((part) => (part.success ? part.data : Number.NaN));
    if (parts.length === 2 && from! < to!) return { fromMs: from!, toMs: to! };
    context.addIssue({
      code: "custom",
      message: "is no range: give FROM..TO, two times, the first before the second",
    });
    return z.NEVER;
  })
  .openapi({
    type: "string",
    description: "FROM..TO",
    example: "2026-12-01T08:00:00Z..2026-12-01T09:00:00Z",
  });

const name = z.string().min(1).max(LONGEST_NAME);
const slice = name.openapi({ description: "`all` or `key=value`", example: "depot=north" });
const state = z.enum(["holding", "straining", "adrift", "thin", "silent"]);

export const streamParams = z.object({ stream: name });
export const featureParams = z.object({ stream: name, feature: name });
export const idParams = z.object({ id: name });

export const featuresQuery = z.object({
  state: state.optional(),
  slice: slice.optional(),
  horizon: name.optional(),
});

export const pairsQuery = z.object({
  from: timePoint.optional(),
  to: timePoint.optional(),
  slice: slice.optional(),
  horizon: name.optional().openapi({ description: "Without from and to: the last window of this horizon" }),
  baseline: name
    .optional()
    .openapi({ description: "Id of a baseline, or the start of one; default: the active one" }),
  against: timeRange
    .optional()
    .openapi({ description: "Another range of production in place of the baseline, FROM..TO" }),
});

export const slicesQuery = z.object({
  from: timePoint.optional(),
  to: timePoint.optional(),
  horizon: name.optional().openapi({ description: "Without from and to: the last window of this horizon" }),
  key: name.optional().openapi({ description: "Slice key; default: the stream's first", example: "depot" }),
  baseline: name.optional(),
});

export const onsetQuery = z.object({
  from: timePoint.optional(),
  to: timePoint.optional().openapi({ description: "Without from and to: the last day that is closed" }),
  slice: slice.optional(),
  baseline: name.optional(),
});

export const timelineQuery = z.object({
  from: timePoint.optional(),
  to: timePoint.optional(),
  horizon: name.optional(),
  slice: slice.optional(),
});

export const sensitivityQuery = z.object({
  feature: name.optional(),
  slice: slice.optional(),
  baseline: name
    .optional()
    .openapi({ description: "Id of a baseline, or the start of one; default: the active one" }),
  eventsPerWindow: z.coerce
    .number()
    .positive()
    .optional()
    .openapi({ description: "Events in a window of the shortest horizon; default: as many as came last" }),
});

export const logbookQuery = z.object({
  stream: name.optional(),
  kind: z
    .enum([
      "state-change",
      "baseline-set",
      "baseline-activated",
      "offset-gap",
      "log-rewound",
      "partition-status",
      "pane-amended",
      "stream-silent",
      "stream-resumed",
      "config-changed",
      "started",
      "stopped",
    ])
    .optional(),
  subject: name.optional(),
  from: timePoint.optional(),
  to: timePoint.optional(),
  before: z.coerce
    .number()
    .int()
    .positive()
    .optional()
    .openapi({ description: "Entries older than this id" }),
  limit: z.coerce.number().int().min(1).max(1_000).default(100),
});

export const activateBody = z.object({
  baseline: name.openapi({ description: "Id of a baseline of the stream, or the start of one" }),
  by: z.string().min(1).max(200).default("http"),
});
