import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { freePort } from "./free-port.js";
import { HostProcess } from "./host-process.js";
import { NotToBeHad } from "./not-to-be-had.js";
import { onPath } from "./on-path.js";
import { type ProgramResult, runProgram } from "./run-program.js";
import { took } from "./took.js";

export interface RunningServer {
  readonly url: string;
  stop(): Promise<void>;
}

/** Prometheus on this machine with the given config; rules, where given, stand beside it as `rules.yml`. */
export async function startPrometheus(files: {
  configText: string;
  rulesText?: string;
}): Promise<RunningServer> {
  const program = programOrThrow("prometheus", "prometheus");
  const home = await mkdtemp(join(tmpdir(), "moorline-prometheus-"));
  const port = await freePort();
  await writeFile(join(home, "prometheus.yml"), files.configText);
  await writeFile(join(home, "rules.yml"), files.rulesText ?? "groups: []\n");
  const args = [
    `--config.file=${join(home, "prometheus.yml")}`,
    `--storage.tsdb.path=${join(home, "data")}`,
    `--web.listen-address=127.0.0.1:${port}`,
  ];
  return serve("Prometheus", program, args, home, port);
}

/** Alertmanager on this machine, alone. */
export async function startAlertmanager(files: { configText: string }): Promise<RunningServer> {
  const program = programOrThrow("prometheus-alertmanager", "prometheus-alertmanager");
  const home = await mkdtemp(join(tmpdir(), "moorline-alertmanager-"));
  const port = await freePort();
  await writeFile(join(home, "alertmanager.yml"), files.configText);
  const args = [
    `--config.file=${join(home, "alertmanager.yml")}`,
    `--storage.path=${join(home, "data")}`,
    `--web.listen-address=127.0.0.1:${port}`,
    "--cluster.listen-address=",
  ];
  return serve("Alertmanager", program, args, home, port);
}

export function promtool(args: readonly string[], input = "", cwd?: string): Promise<ProgramResult> {
  return runProgram(programOrThrow("promtool", "prometheus"), args, input, cwd);
}

export function amtool(args: readonly string[]): Promise<ProgramResult> {
  return runProgram(programOrThrow("amtool", "prometheus-alertmanager"), args);
}

async function serve(name: string, program: string, args: readonly string[], home: string, port: number) {
  const server = new HostProcess(name, program, args, { cwd: home });
  const url = `http://127.0.0.1:${port}`;
  await server.untilReady(async () => (await fetch(`${url}/-/ready`)).ok);
  took(name, `${program} on this machine`);
  return {
    url,
    stop: async () => {
      await server.end();
      await rm(home, { recursive: true, force: true });
    },
  };
}

function programOrThrow(program: string, debianPackage: string): string {
  const path = onPath(program);
  if (path === null) throw new NotToBeHad(program, `install ${debianPackage} (a Debian package)`);
  return path;
}
