import { readFileSync } from "node:fs";
import { Writable } from "node:stream";
import { createTelemetry } from "@moorline/telemetry";
import { Validator } from "@seriousme/openapi-schema-validator";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { ROUTES } from "../src/api/routes.js";
import { type RunningGateway, startGateway } from "../src/index.js";
import {
  BASELINE_ID,
  HOSTILE,
  PANE_MS,
  PANES,
  type Seeded,
  START_MS,
  seededStore,
  valuesOf,
} from "./seeded-store.js";

const STREAM = encodeURIComponent("chill-risk");
const FEATURE = `/v1/streams/${STREAM}/features/cargo_temp`;
const RANGE = `from=${START_MS}&to=${START_MS + PANES * PANE_MS}`;
const quiet = new Writable({ write: (_chunk, _encoding, done) => done() });

let seeded: Seeded;
let gateway: RunningGateway;

beforeAll(async () => {
  seeded = await seededStore();
  gateway = await startGateway({
    config: seeded.config,
    store: seeded.store,
    telemetry: createTelemetry({ service: "gateway", logDestination: quiet }),
    nowMs: () => START_MS + PANES * PANE_MS,
    notice: "All data is invented.",
  });
});

afterAll(async () => {
  await gateway.stop();
  await seeded.close();
});

const get = (path: string, headers: Record<string, string> = {}) =>
  fetch(`${gateway.url}${path}`, { headers });

async function problemOf(response: Response): Promise<{ status: number; detail: string; hint?: string }> {
  expect(response.headers.get("content-type")).toContain("application/problem+json");
  const problem = (await response.json()) as { status: number; detail: string };
  expect(problem.status).toBe(response.status);
  return problem;
}

describe("slices", () => {
  it("names the slice that carries the change, and its parts sum to the distance", async () => {
    const answer = (await (await get(`${FEATURE}/slices?${RANGE}`)).json()) as {
      distance: number;
      sentence: string;
      slices: { slice: string; wasserstein: { within: number; mix: number } }[];
    };
    expect(answer).toMatchObject({ key: "depot", unit: "°C", caution: expect.stringContaining("not proof") });
    expect(answer.slices.map(({ slice }) => slice).toSorted()).toEqual(["depot=north", "depot=south"]);
    const sum = answer.slices.reduce(
      (total, { wasserstein }) => total + wasserstein.within + wasserstein.mix,
      0,
    );
    expect(sum).toBeCloseTo(answer.distance, 9);
    expect(answer.slices[0]!.slice).toBe("depot=north");
    expect(answer.sentence).toMatch(/^depot=north carries /);
  });

  it("refuses a key that the stream has not", async () => {
    const problem = await problemOf(await get(`${FEATURE}/slices?${RANGE}&key=carrier`));
    expect(problem).toMatchObject({
      status: 400,
      detail: expect.stringContaining("carrier is none of depot"),
    });
  });
});

describe("onset", () => {
  it("says since when, or why nothing is found, over the range or the last day", async () => {
    const north = (await (await get(`${FEATURE}/onset?${RANGE}&slice=depot%3Dnorth`)).json()) as Record<
      string,
      unknown
    >;
    // A tenth of the values lies far above in every pane: the change is as old as the range, or older.
    expect(north).toMatchObject({
      found: true,
      interval: { earlier: true },
      windows: PANES,
      windowMs: PANE_MS,
    });
    expect(north["sentence"]).toMatch(
      /^since 2026-01-05 1\d:\d\d at the latest, perhaps before the range UTC: /,
    );
    const all = (await (await get(`${FEATURE}/onset`)).json()) as Record<string, unknown>;
    expect(all).toMatchObject({ found: false, at: null, interval: null });
    expect(all["sentence"]).toMatch(/no lasting change|too few windows/);
  });
});

describe("sensitivity", () => {
  it("tells the smallest changes that page, with what they rest on, and a caution", async () => {
    const answer = (await (
      await get(`/v1/streams/${STREAM}/sensitivity?feature=cargo_temp`)
    ).json()) as Record<string, unknown>;
    expect(answer).toMatchObject({
      stream: "chill-risk",
      slice: "all",
      baseline: { id: BASELINE_ID },
      power: 0.9,
      caution: expect.stringContaining("not proof"),
    });
    const features = answer["features"] as { horizon: string; eventsPerWindow: number; changes: object[] }[];
    // A hundred events a pane; the baseline has no blocks.
    expect(features.map(({ horizon, eventsPerWindow }) => [horizon, eventsPerWindow])).toEqual([
      ["5m", 500],
      ["1h", 6_000],
    ]);
    expect(features[0]).toMatchObject({
      unit: "°C",
      eventsFrom: "stored windows",
      tolerance: { basis: "assumed", seasonal: false },
    });
    expect(features[0]!.changes[0]).toMatchObject({
      change: "higher",
      kind: "move",
      visible: [{ windows: 3 }, {}],
    });
  });

  it.each([
    ["eventsPerWindow=0", 400],
    ["eventsPerWindow=many", 400],
    ["feature=nothing", 404],
    ["baseline=zzz", 404],
  ])("refuses %s with %d", async (query, status) => {
    const response = await get(`/v1/streams/${STREAM}/sensitivity?${query}`);
    expect((await problemOf(response)).status).toBe(status);
  });
});

describe("quantile-pairs", () => {
  it("answers exactly what the values of the range say, with n, window, baseline and slice", async () => {
    const answer = (await (await get(`${FEATURE}/quantile-pairs?${RANGE}`)).json()) as Record<
      string,
      unknown
    >;
    expect(answer).toMatchObject({
      feature: "cargo_temp",
      unit: "°C",
      slice: "all",
      state: "holding",
      n: { baseline: 5_000, production: 6_000 },
      baseline: { id: BASELINE_ID, slice: "all" },
      window: {
        from: new Date(START_MS).toISOString(),
        to: new Date(START_MS + PANES * PANE_MS).toISOString(),
      },
      amended: false,
      ks: { distance: 0 },
    });
    const pairs = answer["pairs"] as { rank: number; baseline: number; production: number }[];
    expect(pairs).toHaveLength(29);
    // 60 times the same hundred values: the median by type 7 lies halfway between 49 and 50.
    expect(pairs.find((pair) => pair.rank === 0.5)).toMatchObject({ baseline: 49.5, production: 49.5 });
  });

  it("of a slice without a baseline of its own is held against the whole, and says so", async () => {
    const answer = await (await get(`${FEATURE}/quantile-pairs?${RANGE}&slice=depot%3Dnorth`)).json();
    const ks = { distance: 0.1, direction: "below" };
    expect(answer).toMatchObject({ state: "adrift", slice: "depot=north", baseline: { slice: "all" }, ks });
  });

  it("takes part of the range, widened to whole panes, and another range in place of the baseline", async () => {
    const against = `${new Date(START_MS).toISOString()}..${START_MS + 10 * PANE_MS}`;
    const from = new Date(START_MS + 10 * PANE_MS + 1).toISOString();
    const to = START_MS + 20 * PANE_MS;
    const answer = await (
      await get(`${FEATURE}/quantile-pairs?from=${from}&to=${to}&against=${against}`)
    ).json();
    expect(answer).toMatchObject({
      n: { baseline: 1_000, production: 1_000 },
      baseline: null,
      ks: { distance: 0, pValue: 1 },
    });
  });

  it("is CSV by Accept: a header, one row a pair, provenance in each, no formula", async () => {
    const path = `/v1/streams/${STREAM}/features/${encodeURIComponent(HOSTILE)}/quantile-pairs?${RANGE}`;
    const response = await get(path, { accept: "text/csv" });
    const [header, ...rows] = (await response.text()).trim().split("\r\n");
    expect(response.headers.get("content-type")).toContain("text/csv");
    expect(header).toBe(
      "stream,feature,slice,from,to,against,n_baseline,n_production,amended,generated_at,rank,baseline,production,low,high",
    );
    expect(rows).toHaveLength(29);
    for (const row of rows) {
      expect(row).toContain(BASELINE_ID);
      expect(row).not.toMatch(/(^|,)[=+@-]\D/);
    }
  });

  it("is the figure by Accept, with any name as text", async () => {
    const path = `/v1/streams/${STREAM}/features/${encodeURIComponent(HOSTILE)}/quantile-pairs?${RANGE}`;
    const svg = await (await get(path, { accept: "image/svg+xml" })).text();
    expect(svg).toContain("<svg");
    expect(svg).not.toContain("<script");
    expect(svg.match(/class="mark/g)?.length).toBe(29);
  });

  it("without a range is the last evaluated window", async () => {
    const answer = await (await get(`${FEATURE}/quantile-pairs`)).json();
    expect(answer).toMatchObject({ n: { production: PANES * valuesOf("all").length } });
  });

  it("of a range without events is thin, with nulls in place of numbers", async () => {
    const answer = await (await get(`${FEATURE}/quantile-pairs?from=0&to=60000`)).json();
    expect(answer).toMatchObject({ state: "thin", n: { production: 0 }, ks: null, tails: null, pairs: [] });
    expect(JSON.stringify(answer)).not.toMatch(/NaN|Infinity/);
  });
});

describe("the other routes", () => {
  it("lists streams with the health of their feed, and features worst first", async () => {
    const { streams } = (await (await get("/v1/streams")).json()) as { streams: { name: string }[] };
    expect(streams).toEqual([expect.objectContaining({ name: "chill-risk", features: 2 })]);
    const list = (await (await get(`/v1/streams/${STREAM}/features`)).json()) as {
      features: { slice: string; state: string }[];
    };
    expect(list.features.map((row) => [row.slice, row.state])).toEqual([
      ["depot=north", "adrift"],
      ["all", "holding"],
    ]);
    const adrift = (await (
      await get(`/v1/streams/${STREAM}/features?state=adrift&slice=all`)
    ).json()) as typeof list;
    expect(adrift.features).toEqual([]);
  });

  it("gives the timeline, the logbook and the baselines", async () => {
    const timeline = (await (await get(`${FEATURE}/timeline?${RANGE}`)).json()) as { points: unknown[] };
    expect(timeline.points).toEqual([
      expect.objectContaining({ horizon: "1h", n: 6_000, ks: 0.01, tailRatio: { lower: null, upper: null } }),
    ]);
    const { entries } = (await (await get("/v1/logbook?kind=state-change")).json()) as { entries: unknown[] };
    expect(entries).toEqual([expect.objectContaining({ subject: "cargo_temp", sentence: "it is adrift" })]);
    const list = (await (await get(`/v1/streams/${STREAM}/baselines`)).json()) as { baselines: unknown[] };
    expect(list.baselines).toEqual([
      expect.objectContaining({ id: BASELINE_ID, active: true, note: "invented" }),
    ]);
    expect(await (await get(`/v1/baselines/${BASELINE_ID}`)).json()).toMatchObject({
      manifest: { thresholds: [{ slice: "all" }] },
    });
  });

  it("is live, ready, and measured", async () => {
    expect((await get("/livez")).status).toBe(200);
    await expect.poll(async () => (await get("/readyz")).status).toBe(200);
    expect(await (await get("/metrics")).text()).toContain("# TYPE moorline_feature_state gauge");
  });
});

describe("requests that cannot be answered", () => {
  it.each([
    [`/v1/streams/none`, 404, "there is no stream none"],
    [`/v1/streams/${STREAM}/features/none/quantile-pairs`, 404, "has no feature none"],
    [`${FEATURE}/quantile-pairs?from=5&to=5`, 400, "from must be before to"],
    [`${FEATURE}/quantile-pairs?from=5`, 400, "from and to go together"],
    [`${FEATURE}/quantile-pairs?from=yesterday&to=5`, 400, "query from: is no time"],
    [`${FEATURE}/quantile-pairs?against=5..4`, 400, "query against: is no range"],
    [`${FEATURE}/quantile-pairs?${RANGE}&baseline=ffff`, 404, ""],
    [`/v1/streams/${STREAM}/features?state=fine`, 400, "query state"],
    ["/v1/logbook?limit=0", 400, "query limit"],
    ["/v1/logbook?limit=1e9", 400, "query limit"],
    ["/v1/baselines/none", 404, ""],
    ["/v1/nothing", 404, "there is nothing at /v1/nothing"],
    ["/v1/streams/%ff", 400, "cannot be decoded"],
    ["/nothing", 404, "there is nothing"],
  ])("GET %s is a problem with status %d", async (path, status, detail) => {
    const response = await get(path);
    expect(response.status).toBe(status);
    expect((await problemOf(response)).detail).toContain(detail);
  });

  it("a method or media type that there is not is 405 or 406, and says what there is", async () => {
    const response = await fetch(`${gateway.url}/v1/streams`, { method: "DELETE" });
    expect([response.status, response.headers.get("allow")]).toEqual([405, "GET"]);
    await problemOf(response);
    expect((await get(`${FEATURE}/quantile-pairs`, { accept: "image/gif" })).status).toBe(406);
  });
});

describe("PUT active-baseline", () => {
  const put = (body: string, headers: Record<string, string> = {}) =>
    fetch(`${gateway.url}/v1/streams/${STREAM}/active-baseline`, {
      method: "PUT",
      body,
      headers: { "content-type": "application/json", ...headers },
    });

  it("activates by the start of an id, on the loopback", async () => {
    const response = await put(JSON.stringify({ baseline: "bbbbbbbb", by: "a test" }));
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ id: BASELINE_ID, active: true });
  });

  it.each([
    ["{", {}, 400],
    [JSON.stringify({ by: "x" }), {}, 400],
    [JSON.stringify({ baseline: "c" }), {}, 404],
    [JSON.stringify({ baseline: "b", by: "x".repeat(200_000) }), {}, 413],
    [JSON.stringify({ baseline: "bbbbbbbb" }), { origin: "http://elsewhere.example" }, 403],
  ])("refuses request %#", async (body, headers, status) => {
    const response = await put(body, headers);
    expect(response.status).toBe(status);
    await problemOf(response);
  });
});

describe("/v1/openapi.json", () => {
  it("is a valid OpenAPI 3.1 document with an entry for every route", async () => {
    const document = (await (await get("/v1/openapi.json")).json()) as {
      paths: Record<string, Record<string, unknown>>;
    };
    const result = await new Validator().validate(document);
    expect(result.valid, JSON.stringify(result.errors)).toBe(true);
    const documented = Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method} ${path}`),
    );
    expect(documented.toSorted()).toEqual(ROUTES.map((route) => `${route.method} ${route.path}`).toSorted());
  });

  it("describes what the routes answer", async () => {
    const paths: Record<string, string> = {
      "/v1/streams": "/v1/streams",
      "/v1/streams/{stream}": `/v1/streams/${STREAM}`,
      "/v1/streams/{stream}/features": `/v1/streams/${STREAM}/features`,
      "/v1/streams/{stream}/sensitivity": `/v1/streams/${STREAM}/sensitivity`,
      "/v1/streams/{stream}/features/{feature}/quantile-pairs": `${FEATURE}/quantile-pairs?${RANGE}`,
      "/v1/streams/{stream}/features/{feature}/slices": `${FEATURE}/slices?${RANGE}`,
      "/v1/streams/{stream}/features/{feature}/onset": `${FEATURE}/onset?${RANGE}`,
      "/v1/streams/{stream}/features/{feature}/timeline": `${FEATURE}/timeline?${RANGE}`,
      "/v1/streams/{stream}/baselines": `/v1/streams/${STREAM}/baselines`,
      "/v1/baselines/{id}": `/v1/baselines/${BASELINE_ID}`,
      "/v1/logbook": "/v1/logbook",
    };
    for (const route of ROUTES.filter((one) => one.method === "get")) {
      const answer: unknown = await (await get(paths[route.path]!)).json();
      const checked = route.answer.safeParse(answer);
      expect(checked.success, `${route.path}: ${checked.error?.message}`).toBe(true);
    }
  });
});

describe("the pages", () => {
  it("show every name as text and the notice, under a policy without inline code", async () => {
    const home = await get("/");
    const html = await home.text();
    expect(home.headers.get("content-security-policy")).toContain("default-src 'none'");
    expect(home.headers.get("content-security-policy")).not.toContain("unsafe-inline");
    expect(html).toContain("All data is invented.");
    expect(html).not.toMatch(/<style|style="|<script>/);
    const page = await (
      await get(`/streams/${STREAM}/features/${encodeURIComponent(HOSTILE)}?${RANGE}`)
    ).text();
    expect(page).not.toContain("<script>alert");
    expect(page).toContain("&lt;script>alert");
    expect(page).toContain("quantile pairs of 5000 baseline and 6000 production values");
  });

  it("link to assets that there are", async () => {
    const html = await (await get("/")).text();
    const assets = [...html.matchAll(/(?:href|src)="(\/assets\/[^"]+)"/g)].map((match) => match[1]!);
    expect(assets).toHaveLength(3);
    for (const asset of assets) expect((await get(asset)).status).toBe(200);
  });

  it("say in words what cannot be shown", async () => {
    const response = await get(`/streams/none`);
    expect(response.status).toBe(404);
    expect(await response.text()).toContain("there is no stream none");
  });
});

describe("README.md", () => {
  it("names every route, and no other", () => {
    const readme = readFileSync(new URL("../README.md", import.meta.url), "utf8");
    const documented = [...readme.matchAll(/^\| `(GET|PUT) (\/v1\S+)`/gm)].map(
      (match) => `${match[1]!.toLowerCase()} ${match[2]}`,
    );
    expect(documented.toSorted()).toEqual(ROUTES.map((route) => `${route.method} ${route.path}`).toSorted());
  });
});
