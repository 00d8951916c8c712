import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { amtool, promtool } from "../real-parts/index.js";

// What Prometheus and Alertmanager themselves say of the files in deploy/prometheus. Not covered: that a rule fires on a running Moorline
// (journeys/prometheus-alert).
const folder = fileURLToPath(new URL("../../deploy/prometheus", import.meta.url));

describe("deploy/prometheus", () => {
  it.each([
    ["check", "rules", "moorline.rules.yml"],
    ["test", "rules", "moorline.rules.test.yml"],
    ["check", "config", "prometheus.yml"],
  ])("promtool %s %s %s", async (...args) => {
    const { exitCode, stdout, stderr } = await promtool(args, "", folder);
    expect(exitCode, stdout + stderr).toBe(0);
    expect(stdout).toContain("SUCCESS");
  });

  it("amtool check-config alertmanager.yml", async () => {
    const { exitCode, stdout, stderr } = await amtool(["check-config", `${folder}/alertmanager.yml`]);
    expect(exitCode, stdout + stderr).toBe(0);
  });
});
