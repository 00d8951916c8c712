import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { loadConfig } from "@moorline/config";
import { describe, expect, it } from "vitest";
import { prometheusRules } from "../src/index.js";

const path = (name: string) => fileURLToPath(new URL(`../../../deploy/${name}`, import.meta.url));

describe("prometheusRules", () => {
  const rules = prometheusRules(loadConfig(path("examples/moorline.one-process.yaml"), {}));

  it("of the example config is the file in deploy/prometheus", () => {
    expect(rules).toBe(readFileSync(path("prometheus/moorline.rules.yml"), "utf8"));
  });

  it("gives every alert a summary, a description, a severity, and the page a link", () => {
    for (const alert of [
      "FeatureAdrift",
      "FeedSilent",
      "CollectorBehind",
      "EvaluationStale",
      "DeadLetters",
    ]) {
      const [, body] = rules.split(`- alert: ${alert}\n`);
      const rule = body!.split("- alert:")[0];
      for (const part of ["summary:", "description:", "severity:"]) expect(rule).toContain(part);
    }
    expect(rules).toContain("snapshot: http://localhost:7460/streams/chill-risk/features/");
  });
});
