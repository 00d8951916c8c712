import { PATTERN_KINDS } from "@moorline/stats";
import { z } from "./z.js";

const time = z.string().openapi({ format: "date-time" });
const state = z.enum(["holding", "straining", "adrift", "thin", "silent"]);
const maybe = z.number().nullable();
const both = <T extends z.ZodType>(inner: T) => z.object({ baseline: inner, production: inner });
const range = z.object({ from: time, to: time });

export const problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number(),
  detail: z.string(),
  hint: z.string().optional(),
  code: z.string().optional(),
});

export const streamSummary = z.object({
  name: z.string(),
  features: z.number(),
  slices: z.array(z.string()),
  horizons: z.array(z.string()),
  activeBaseline: z.object({ id: z.string(), since: time }).nullable(),
  states: z.object({
    adrift: z.number(),
    straining: z.number(),
    silent: z.number(),
    thin: z.number(),
    holding: z.number(),
  }),
  feed: z.object({
    events: z.number(),
    lateEvents: z.number(),
    deadLetters: z.number(),
    partitions: z.number(),
    halted: z.array(z.object({ topic: z.string(), partition: z.number(), status: z.string() })),
    lastEventAt: time.nullable(),
    watermark: time.nullable(),
    evaluatedAt: time.nullable(),
  }),
});
export const streamList = z.object({ streams: z.array(streamSummary) });

export const featureRow = z.object({
  feature: z.string(),
  kind: z.literal("numeric"),
  unit: z.string().nullable(),
  slice: z.string(),
  horizon: z.string(),
  state,
  since: time,
  window: range.nullable(),
  reading: z.string(),
  baselineId: z.string().nullable(),
  amended: z.boolean(),
  n: maybe,
  missing: maybe,
  ks: maybe,
  wassersteinScaled: maybe,
  tailRatio: z.object({ lower: maybe, upper: maybe }),
});
export const featureList = z.object({ stream: z.string(), features: z.array(featureRow) });

const tail = z
  .object({
    rank: z.number(),
    threshold: z.number(),
    exceedance: z.number(),
    ratio: maybe,
    interval: z.array(maybe).length(2).nullable(),
  })
  .loose();

const interval = z.array(z.number()).length(2);
const tailRank = z.object({
  rank: z.number(),
  threshold: maybe,
  exceedance: maybe,
  expected: maybe,
  ratio: maybe,
  interval: interval.nullable(),
  n: both(z.number()),
  exactCount: z.boolean().nullable(),
  sentence: z.string(),
  beyondData: z.literal(true).optional(),
});
const shiftPoint = z.object({
  rank: z.number(),
  difference: maybe,
  ratio: maybe,
  low: maybe,
  high: maybe,
  beyondData: z.literal(true).optional(),
});
const wassersteinChange = z.object({
  distance: z.number(),
  noise: z.number(),
  aboveNoise: z.boolean(),
  interval: interval.nullable(),
});
const chanceLevel = z.object({ expected: z.number(), upper95: z.number(), upper99: z.number() });

export const pairsAnswer = z
  .object({
    stream: z.string(),
    feature: z.string(),
    kind: z.literal("numeric"),
    unit: z.string().nullable(),
    slice: z.string(),
    state,
    reading: z.string(),
    pattern: z.object({
      kind: z.enum(PATTERN_KINDS),
      sentence: z.string(),
      runnerUp: z.enum(PATTERN_KINDS).nullable(),
      figures: z.record(z.string(), z.number()),
    }),
    dependence: z
      .object({
        basis: z.enum(["time", "rows"]),
        designEffect: z.object({ p1: z.number(), p50: z.number(), p99: z.number() }),
      })
      .nullable(),
    window: range,
    baseline: z.object({ id: z.string(), slice: z.string() }).nullable(),
    against: range.nullable(),
    amended: z.boolean(),
    generatedAt: time,
    n: both(z.number()),
    missing: both(maybe),
    ks: z
      .object({
        distance: z.number(),
        at: z.number(),
        direction: z.enum(["above", "below"]),
        pValue: z.number(),
      })
      .nullable(),
    wasserstein: z.object({ distance: z.number(), scaled: maybe }).nullable(),
    tails: z.object({ lower: tail.nullable(), upper: tail.nullable() }).nullable(),
    tailRanks: z.object({ lower: z.array(tailRank), upper: z.array(tailRank) }).nullable(),
    psi: maybe,
    jensenShannon: maybe,
    andersonDarling: z
      .object({ statistic: z.number(), standardised: z.number(), pValue: z.number() })
      .nullable(),
    wassersteinNoise: wassersteinChange.omit({ distance: true }).nullable(),
    wassersteinTails: z.object({ lower: wassersteinChange, upper: wassersteinChange }).nullable(),
    psiNoise: chanceLevel.nullable(),
    jensenShannonNoise: chanceLevel.nullable(),
    missingChange: z
      .object({ difference: z.number(), interval, z: z.number(), pValue: z.number() })
      .loose()
      .nullable(),
    pairs: z.array(
      z.object({ rank: z.number(), baseline: maybe, production: maybe, low: maybe, high: maybe }).loose(),
    ),
    shift: z.array(shiftPoint),
    caution: z.string(),
  })
  .loose();

const part = z.object({ within: z.number(), mix: z.number() });

export const slices = z.object({
  stream: z.string(),
  feature: z.string(),
  unit: z.string().nullable(),
  key: z.string().nullable(),
  window: range,
  baseline: z.object({ id: z.string() }),
  distance: z.number(),
  exceedanceChange: z.object({ lower: z.number(), upper: z.number() }),
  critical: z.number(),
  slices: z.array(
    z.object({
      slice: z.string(),
      n: both(z.number()),
      weight: both(z.number()),
      wasserstein: part,
      share: maybe,
      exceedance: z.object({ lower: part, upper: part }),
      z: maybe,
      trafficZ: z.number(),
    }),
  ),
  sentence: z.string(),
  caution: z.string(),
});

export const onset = z.object({
  stream: z.string(),
  feature: z.string(),
  slice: z.string(),
  window: range,
  baseline: z.object({ id: z.string(), slice: z.string() }),
  windowMs: z.number(),
  windows: z.number(),
  found: z.boolean(),
  at: time.nullable(),
  interval: z.object({ from: time, to: time, earlier: z.boolean() }).nullable(),
  rank: maybe,
  expected: maybe,
  observed: maybe,
  sentence: z.string(),
  caution: z.string(),
});

export const sensitivity = z.object({
  stream: z.string(),
  slice: z.string(),
  baseline: z.object({ id: z.string() }),
  power: z.number(),
  features: z.array(
    z.object({
      feature: z.string(),
      unit: z.string().nullable(),
      horizon: z.string(),
      windowMs: z.number(),
      eventsPerWindow: z.number(),
      eventsFrom: z.enum(["given", "stored windows", "the baseline"]),
      baselineSlice: z.string(),
      tolerance: z.object({ basis: z.enum(["time", "rows", "assumed"]), seasonal: z.boolean() }),
      needed: z.object({ adrift: z.number(), straining: z.number() }),
      changes: z.array(
        z.object({
          change: z.string(),
          kind: z.enum(["move", "factor", "share"]),
          visible: z.array(z.object({ windows: z.number(), size: z.number(), inDeviations: maybe })),
        }),
      ),
      blindRanks: z.array(z.number()),
    }),
  ),
  caution: z.string(),
});

export const timeline = z.object({
  stream: z.string(),
  feature: z.string(),
  slice: z.string(),
  points: z.array(
    z.object({
      horizon: z.string(),
      window: range,
      baselineId: z.string(),
      state,
      events: z.number(),
      amended: z.boolean(),
      n: maybe,
      missing: maybe,
      ks: maybe,
      wassersteinScaled: maybe,
      tailRatio: z.object({ lower: maybe, upper: maybe }),
    }),
  ),
});

const baseline = z.object({
  id: z.string(),
  stream: z.string(),
  createdAt: time,
  createdBy: z.string(),
  note: z.string(),
  active: z.boolean(),
});
export const baselineList = z.object({ stream: z.string(), baselines: z.array(baseline) });
export const baselineDetail = baseline.extend({ manifest: z.unknown() });

export const logbook = z.object({
  entries: z.array(
    z.object({
      id: z.number(),
      at: time,
      stream: z.string().nullable(),
      kind: z.string(),
      subject: z.string(),
      sentence: z.string(),
      detail: z.unknown(),
    }),
  ),
});
