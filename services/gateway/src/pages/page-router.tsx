import { createHash } from "node:crypto";
import { readOnset, readPairs, readSlices } from "@moorline/answers";
import type { StreamConfig } from "@moorline/config";
import { isMoorlineError, MoorlineError } from "@moorline/errors";
import { type NextFunction, type Request, type Response, Router } from "express";
import type { VNode } from "preact";
import { featureRows } from "../answers/feature-rows.js";
import { type PairsQuery, pairsRequest } from "../answers/pairs-request.js";
import { streamSummary } from "../answers/stream-summary.js";
import { pairsQuery } from "../api/query-schemas.js";
import { featureOf, type GatewayContext, streamOf } from "../gateway-context.js";
import { FeatureContent, type WhereAndWhen } from "./feature-page.js";
import { pageHtml } from "./page-frame.js";
import { PAGE_ICON, PAGE_SCRIPT, PAGE_STYLE } from "./page-style.js";
import { StreamSection } from "./stream-page.js";

const ASSETS = {
  style: { path: `/assets/${hashed(PAGE_STYLE)}.css`, type: "text/css", text: PAGE_STYLE },
  script: { path: `/assets/${hashed(PAGE_SCRIPT)}.js`, type: "text/javascript", text: PAGE_SCRIPT },
  icon: { path: `/assets/${hashed(PAGE_ICON)}.svg`, type: "image/svg+xml", text: PAGE_ICON },
} as const;

/** The pages: every stream, one stream, one feature. Errors on them are pages too. */
export function pageRouter(context: GatewayContext): Router {
  const router = Router();
  for (const asset of Object.values(ASSETS)) {
    router.get(asset.path, (_request, response) => {
      response.set("Cache-Control", "public, max-age=31536000, immutable").type(asset.type).send(asset.text);
    });
  }
  const page = (path: string, render: (request: Request) => Promise<{ title: string; content: VNode }>) => {
    router.get(path, async (request: Request, response: Response, next: NextFunction) => {
      try {
        const { title, content } = await render(request);
        sendPage(context, response, 200, title, content);
      } catch (error) {
        if (!isMoorlineError(error)) {
          next(error);
          return;
        }
        const status = error.category === "INPUT" ? 400 : error.category === "STATE" ? 404 : 503;
        sendPage(
          context,
          response,
          status,
          "Not to be shown",
          <ErrorContent message={error.message} hint={error.hint} />,
        );
      }
    });
  };
  page("/", () =>
    streamsPage(
      context,
      context.config.streams.map((stream) => stream.name),
      "all",
    ),
  );
  page("/streams/:stream", (request) => {
    const { slice } = checkedQuery(request);
    return streamsPage(context, [String(request.params["stream"])], slice ?? "all");
  });
  page("/streams/:stream/features/:feature", (request) => featurePage(context, request));
  return router;
}

function sendPage(
  context: GatewayContext,
  response: Response,
  status: number,
  title: string,
  content: VNode,
): void {
  const assets = { style: ASSETS.style.path, script: ASSETS.script.path, icon: ASSETS.icon.path };
  const html = pageHtml({ title, notice: context.notice, assets, children: content });
  response.status(status).set("Cache-Control", "no-cache").type("text/html").send(html);
}

async function streamsPage(context: GatewayContext, names: readonly string[], slice: string) {
  const streams = names.map((name) => streamOf(context, name));
  const sections = await Promise.all(
    streams.map(async (stream) => ({
      summary: await streamSummary(context.store, stream),
      rows: await featureRows(context.store, stream, { slice }),
    })),
  );
  const content = (
    <>
      <h1>Features</h1>
      {sections.map(({ summary, rows }) => (
        <StreamSection key={summary.name} stream={summary} rows={rows} slice={slice} />
      ))}
    </>
  );
  return { title: "Features", content };
}

async function featurePage(context: GatewayContext, request: Request) {
  const stream = streamOf(context, String(request.params["stream"]));
  const name = featureOf(stream, String(request.params["feature"])).name;
  const query = checkedQuery(request);
  const slice = query.slice ?? "all";
  const [answer, rows, slices] = await Promise.all([
    pairsRequest(context, stream, name, query).then(readPairs),
    featureRows(context.store, stream, { slice }),
    context.store.panes.slices(stream.name),
  ]);
  const own = rows.filter((row) => row.feature === name);
  const told = answer.baseline === null ? null : await whereAndWhen(context, stream, name, query);
  return { title: name, content: <FeatureContent answer={answer} rows={own} slices={slices} told={told} /> };
}

/** Since when the feature is different, and which slice carries it, in words. */
async function whereAndWhen(
  context: GatewayContext,
  stream: StreamConfig,
  name: string,
  query: PairsQuery,
): Promise<WhereAndWhen> {
  const request = await pairsRequest(context, stream, name, query);
  const isGiven = query.from !== undefined;
  const [onset, slices] = await Promise.all([
    readOnset({ ...request, range: isGiven ? request.range : null }),
    stream.slices.length === 0 ? null : readSlices({ ...request, key: null }),
  ]);
  return { onset: onset.sentence, slices: slices?.sentence ?? null };
}

/** @throws MOORLINE_INPUT_QUERY */
function checkedQuery(request: Request) {
  const result = pairsQuery.safeParse(request.query);
  if (result.success) return result.data;
  const reason = result.error.issues.map((issue) => `${issue.path.join(".")} ${issue.message}`).join("; ");
  throw new MoorlineError("MOORLINE_INPUT_QUERY", { reason });
}

function ErrorContent({ message, hint }: { readonly message: string; readonly hint: string }): VNode {
  return (
    <>
      <h1>This cannot be shown</h1>
      <p class="reading">{`${message}.`}</p>
      <p>{`What to do: ${hint}.`}</p>
    </>
  );
}

function hashed(text: string): string {
  return createHash("sha256").update(text).digest("hex").slice(0, 16);
}
