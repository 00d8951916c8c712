import { createServer } from "node:net";
import { MoorlineError } from "@moorline/errors";
import { afterAll, describe, expect, it } from "vitest";
import type { CommandIo } from "../src/index.js";
import { checkPort } from "../src/run/check-port.js";
import { parseParts } from "../src/run/parts.js";
import { reportError } from "../src/terminal/report-error.js";
import { moorline, TestFolder } from "./capture-io.js";

const folder = new TestFolder();
afterAll(() => folder.remove());

describe("runCommandLine", () => {
  const refused: readonly (readonly [string[], RegExp])[] = [
    [["compar"], /unknown command 'compar'\n\(Did you mean compare\?\)/],
    [["audit", "--strem", "s"], /unknown option '--strem'\n\(Did you mean --stream\?\)/],
    [["compare", "one.csv"], /missing required argument 'production-file'/],
    [["pairs"], /required option '--feature <name>' not specified/],
    [
      ["audit", "--config", "/nowhere.yaml"],
      /config file \/nowhere\.yaml cannot be read: there is no such file; name an existing file/,
    ],
    [
      ["run", "--only", "collectr"],
      /--only is collectr, which is not a list of gateway, evaluator, collector/,
    ],
    [["run", "--demo", "--only", "gateway"], /run needs exactly one of --demo and --config or --only/],
  ];
  it.each(refused)(
    "answers %j with 2, what is wrong and what to do, and no stack trace",
    async (args, message) => {
      const { status, out, err } = await moorline(args);
      expect([status, out]).toEqual([2, ""]);
      expect(err).toMatch(/^moorline: /);
      expect(err).toMatch(message);
      expect(err).not.toMatch(/^\s+at /m);
    },
  );

  it("prints help to standard output with 0", async () => {
    const { status, out, err } = await moorline(["--help"]);
    expect([status, err]).toEqual([0, ""]);
    for (const command of ["run", "baseline", "compare", "pairs", "audit", "check", "rules"]) {
      expect(out).toMatch(new RegExp(`^  ${command} `, "m"));
    }
  });

  it("prints its version with 0", async () => {
    expect(await moorline(["--version"])).toEqual({ status: 0, out: "0.1.0\n", err: "" });
  });

  it("takes the config from MOORLINE_CONFIG where --config is not given", async () => {
    const { err } = await moorline(["audit"], { MOORLINE_CONFIG: "/elsewhere.yaml" });
    expect(err).toContain("/elsewhere.yaml cannot be read");
  });
});

describe("reportError", () => {
  const reported = (error: unknown, env: Record<string, string> = {}) => {
    let err = "";
    const io: CommandIo = {
      env,
      out: () => undefined,
      err: (text) => {
        err += text;
      },
      isTerminal: false,
      nowMs: () => 0,
      exitStatus: 0,
    };
    reportError(io, error);
    return { status: io.exitStatus, err };
  };

  it.each([
    ["MOORLINE_CONFIG_UNREADABLE", 2],
    ["MOORLINE_INPUT_FILES_NONE", 2],
    ["MOORLINE_STATE_BASELINE_UNKNOWN", 2],
    ["MOORLINE_FORMAT_SKETCH", 3],
    ["MOORLINE_UPSTREAM_PORT_TAKEN", 3],
  ] as const)("ends with the status of the category of %s", (code, status) => {
    expect(reported(new MoorlineError(code)).status).toBe(status);
  });

  it("says an unknown error in one line, with 4, and how to see more", () => {
    const { status, err } = reported(new TypeError("x is not a function\n    at secret.js:1"));
    expect(status).toBe(4);
    expect(err).toBe(
      "moorline: something unexpected happened (x is not a function); set MOORLINE_DEBUG=1 and run it again to see where\n",
    );
  });

  it("shows the stack and the causes with MOORLINE_DEBUG=1", () => {
    const cause = new Error("disk on fire");
    const error = new MoorlineError("MOORLINE_STATE_EMPTY_SKETCH", {}, { cause });
    const { err } = reported(error, { MOORLINE_DEBUG: "1" });
    expect(err).toMatch(/^\s+at .*program\.test\.ts/m);
    expect(err).toContain("caused by Error: disk on fire");
  });
});

describe("parseParts", () => {
  it("gives every part without --only, and the named ones in the order in which they start", () => {
    expect(parseParts(undefined)).toEqual(["gateway", "evaluator", "collector"]);
    expect(parseParts("collector, gateway")).toEqual(["gateway", "collector"]);
  });
});

describe("checkPort", () => {
  it("says plainly that a port is taken, and how to take another", async () => {
    const server = createServer().listen(0, "127.0.0.1");
    await new Promise((resolve) => server.once("listening", resolve));
    const { port } = server.address() as { port: number };
    const refusal = expect(checkPort({ host: "127.0.0.1", port }, "GATEWAY")).rejects;
    await refusal.toMatchObject({
      message: `port ${port} on 127.0.0.1 is taken by another program`,
      hint: "stop that program, or take another port: MOORLINE_GATEWAY_PORT=7470",
    });
    await new Promise((resolve) => server.close(resolve));
    await expect(checkPort({ host: "127.0.0.1", port }, "GATEWAY")).resolves.toBe(undefined);
  });

  it("says that an address is none of this machine", async () => {
    await expect(checkPort({ host: "192.0.2.1", port: 26_001 }, "GATEWAY")).rejects.toThrow(
      /cannot be listened on/,
    );
  });
});
