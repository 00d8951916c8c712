import { once } from "node:events";
import { mkdtemp, rm } from "node:fs/promises";
import { createServer, type Server } from "node:http";
import type { AddressInfo } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  CliChild,
  freePort,
  promtool,
  type RunningServer,
  runCli,
  startAlertmanager,
  startPrometheus,
} from "../real-parts/index.js";

// The running demo scraped by a real Prometheus; its rule fires for the drifted feature and reaches a webhook through a real Alertmanager.

interface Notice {
  readonly alerts: readonly {
    readonly status: string;
    readonly labels: Readonly<Record<string, string>>;
    readonly annotations: Readonly<Record<string, string>>;
  }[];
}

/** The demo drifts within two minutes; scraping and grouping add seconds. */
const ALERT_WITHIN_MS = 170_000;
/** After the alert the run goes on for this long: a feature that holds must stay quiet for all of it. */
const WATCHED_ON_MS = 20_000;

let folder: string;
let demo: CliChild;
let prometheus: RunningServer;
let alertmanager: RunningServer;
let receiver: Server;
let base: string;
const notices: Notice[] = [];
const env: Record<string, string> = {};

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "moorline-alert-"));
  const port = await freePort();
  base = `http://127.0.0.1:${port}`;
  env["MOORLINE_DEMO_DIR"] = join(folder, "demo");
  env["MOORLINE_GATEWAY_PORT"] = String(port);
  demo = new CliChild(["run", "--demo"], { cwd: folder, env });
  await until("the demo answers", 60_000, async () => (await fetch(`${base}/livez`)).ok);
  receiver = await webhook();
  alertmanager = await startAlertmanager({
    configText: alertmanagerConfig((receiver.address() as AddressInfo).port),
  });
  const rules = await runCli(["rules", "--config", join(folder, "demo", "moorline.yaml")], {
    cwd: folder,
    env,
  });
  expect(rules.status, rules.err).toBe(0);
  prometheus = await startPrometheus({ configText: prometheusConfig(port), rulesText: rules.out });
}, 120_000);

afterAll(async () => {
  await prometheus?.stop();
  await alertmanager?.stop();
  receiver?.close();
  await demo?.end("SIGINT");
  await rm(folder, { recursive: true, force: true });
});

function prometheusConfig(port: number): string {
  return `global: { scrape_interval: 1s, evaluation_interval: 1s }
rule_files: [rules.yml]
alerting: { alertmanagers: [{ static_configs: [{ targets: ["${new URL(alertmanager.url).host}"] }] }] }
scrape_configs:
  - job_name: moorline
    static_configs: [{ targets: ["127.0.0.1:${port}"] }]
`;
}

function alertmanagerConfig(port: number): string {
  return `route: { receiver: on-call, group_by: [alertname, stream, feature], group_wait: 1s, group_interval: 2s }
receivers:
  - name: on-call
    webhook_configs: [{ url: "http://127.0.0.1:${port}/", send_resolved: true }]
`;
}

async function webhook(): Promise<Server> {
  const server = createServer((request, response) => {
    let body = "";
    request.on("data", (chunk: Buffer) => {
      body += chunk.toString();
    });
    request.on("end", () => {
      notices.push(JSON.parse(body) as Notice);
      response.end();
    });
  });
  server.listen(0, "127.0.0.1");
  await once(server, "listening");
  return server;
}

async function until(what: string, withinMs: number, ready: () => boolean | Promise<boolean>): Promise<void> {
  const deadline = Date.now() + withinMs;
  while (!(await Promise.resolve(ready()).catch(() => false))) {
    if (!demo.running) throw new Error(`the demo ended: ${demo.lastOutput}`);
    if (Date.now() > deadline) throw new Error(`not within ${withinMs} ms: ${what}`);
    await sleep(500);
  }
}

const received = () => notices.flatMap((notice) => notice.alerts);
const adrift = () => received().filter((alert) => alert.labels["alertname"] === "FeatureAdrift");

describe("the running demo under Prometheus and Alertmanager", () => {
  it("the page for the drifted feature reaches the webhook, with its tail, figures and a link that answers", async () => {
    await until("the alert for cargo_temp", ALERT_WITHIN_MS, () => adrift().length > 0);
    const [alert] = adrift();
    expect(alert).toMatchObject({
      status: "firing",
      labels: { feature: "cargo_temp", stream: "chill-risk", severity: "page", state: "adrift" },
    });
    const { summary, description, snapshot } = alert!.annotations;
    expect(summary).toContain("cargo_temp of chill-risk is adrift");
    expect(description).toMatch(/upper tail \d+\.\d\d.* n = \d+ values.*Drift is not proof of harm/s);
    const link = await fetch(snapshot!);
    expect(link.status).toBe(200);
    expect(await link.text()).toContain("cargo_temp (°C)");
  }, 200_000);

  it("a feature that holds raises nothing for the whole run", async () => {
    await sleep(WATCHED_ON_MS);
    const query = `count by (feature) (max_over_time(ALERTS{alertname="FeatureAdrift"}[10m]))`;
    const response = await fetch(`${prometheus.url}/api/v1/query?query=${encodeURIComponent(query)}`);
    const { data } = (await response.json()) as { data: { result: { metric: { feature: string } }[] } };
    expect(data.result.map((series) => series.metric.feature)).toEqual(["cargo_temp"]);
    expect(new Set(adrift().map((alert) => alert.labels["feature"]))).toEqual(new Set(["cargo_temp"]));
    expect(new Set(received().map((alert) => alert.labels["alertname"]))).toEqual(new Set(["FeatureAdrift"]));
  }, 60_000);

  it("promtool check metrics finds nothing in /metrics", async () => {
    const metrics = await (await fetch(`${base}/metrics`)).text();
    const { exitCode, stdout, stderr } = await promtool(["check", "metrics"], metrics);
    expect(stdout + stderr).toBe("");
    expect(exitCode).toBe(0);
    expect(metrics).toMatch(/moorline_feature_state\{[^}]*feature="cargo_temp"[^}]*state="adrift"[^}]*\} 1/);
  });
});
