import { readFileSync } from "node:fs";
import { MoorlineError } from "@moorline/errors";
import { LineCounter, parseDocument } from "yaml";
import type { DecisionConfig } from "./moorline-config.js";
import { contentOf, invalid, placed, reasonOf, syntaxProblems } from "./placed-problems.js";
import { DECISION_SCHEMA } from "./schema.js";
import { shapeProblems } from "./shape-problems.js";

/** Where the keys of a tolerances file stand in a config: what is known there is advised here. */
const IN_CONFIG = ["streams", 0, "decision"] as const;

/**
 * Reads tolerances to be tried on past windows: a YAML file with the keys of a stream's `decision` block; what it leaves out has its default.
 *
 * @throws MOORLINE_CONFIG_UNREADABLE when the file cannot be read
 * @throws MOORLINE_CONFIG_INVALID with every problem in `details.problems`
 */
export function loadTolerances(file: string): DecisionConfig {
  let text: string;
  try {
    text = readFileSync(file, "utf8");
  } catch (cause) {
    throw new MoorlineError("MOORLINE_CONFIG_UNREADABLE", { file, reason: reasonOf(cause) }, { cause });
  }
  const lines = new LineCounter();
  const document = parseDocument(text, { lineCounter: lines, prettyErrors: false, stringKeys: true });
  if (document.errors.length > 0) throw invalid(file, syntaxProblems(document, lines));
  const data = contentOf(document, file);
  const checked = DECISION_SCHEMA.safeParse(data);
  if (checked.success) return checked.data;
  const issues = checked.error.issues.map((issue) => ({ ...issue, path: [...IN_CONFIG, ...issue.path] }));
  const found = shapeProblems(issues, { streams: [{ decision: data }] }).map((problem) => ({
    ...problem,
    path: problem.path.slice(IN_CONFIG.length),
  }));
  throw invalid(file, placed(found, document, lines, new Map()));
}
