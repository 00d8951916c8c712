import type { z } from "zod";
import type { FoundProblem } from "./config-problem.js";
import { nearestName } from "./nearest-name.js";
import { knownKeysAt } from "./schema-keys.js";

type Issue = z.core.$ZodIssue;

/** Keys that the design has but that this version does not handle: said so, rather than "unknown". */
const NOT_YET: Readonly<Record<string, string>> = {
  alerts:
    "alerts are not sent by this version: leave this out, and let Prometheus alert by the rules of `moorline rules`",
};

/** What the schema found, in the words of the config: one problem a thing to put right. */
export function shapeProblems(issues: readonly Issue[], data: unknown): FoundProblem[] {
  return issues.flatMap((issue) => problemsOf(issue, [], data));
}

function problemsOf(issue: Issue, prefix: readonly PropertyKey[], data: unknown): FoundProblem[] {
  const path = [...prefix, ...issue.path];
  const value = valueAt(data, path);
  switch (issue.code) {
    case "unrecognized_keys":
      return issue.keys.map((key) => ({
        path: [...path, key],
        onKey: true,
        sentence: unknownKey(path, key),
      }));
    case "invalid_union":
      return unionProblems(issue, path, data);
    case "invalid_type":
      if (value === undefined) {
        return [{ path, sentence: "is needed here but missing: add it" }];
      }
      return [{ path, sentence: typeSentence(issue, value) }];
    default:
      return [{ path, sentence: lowerFirst(issue.message) }];
  }
}

/** Of a union's branches, the one that got furthest speaks; a value of no branch's type is said plainly. */
function unionProblems(
  issue: Extract<Issue, { code: "invalid_union" }>,
  path: readonly PropertyKey[],
  data: unknown,
): FoundProblem[] {
  const matching = issue.errors.filter((branch) =>
    branch.every((e) => e.path.length > 0 || e.code !== "invalid_type"),
  );
  const branch = matching[0];
  if (branch !== undefined) return branch.flatMap((inner) => problemsOf(inner, path, data));
  return [
    {
      path,
      sentence: `does not take ${nameOf(valueAt(data, path))}: give text or what the reference allows`,
    },
  ];
}

function unknownKey(path: readonly PropertyKey[], key: string): string {
  if (path.length === 0 && Object.hasOwn(NOT_YET, key)) return NOT_YET[key]!;
  const known = knownKeysAt(path);
  const near = nearestName(key, known);
  const advice = near === null ? `known here are ${known.join(", ")}` : `did you mean ${near}?`;
  return `is not a known key: ${advice}`;
}

function typeSentence(issue: Extract<Issue, { code: "invalid_type" }>, value: unknown): string {
  const message = lowerFirst(issue.message);
  if (!message.startsWith("invalid input")) return `${message}, not ${nameOf(value)}`;
  return `expected ${TYPE_WORDS[issue.expected] ?? issue.expected}, not ${nameOf(value)}`;
}

const TYPE_WORDS: Readonly<Record<string, string>> = {
  string: "text",
  int: "a whole number",
  number: "a number",
  boolean: "true or false",
  array: "a list",
  object: "a block of keys",
};

function nameOf(value: unknown): string {
  if (value === null || value === undefined) return "nothing";
  if (Array.isArray(value)) return "a list";
  if (typeof value === "object") return "a block of keys";
  return `${typeof value === "string" ? "the text" : `the ${typeof value}`} ${JSON.stringify(value).slice(0, 60)}`;
}

function valueAt(data: unknown, path: readonly PropertyKey[]): unknown {
  let value = data;
  for (const part of path) {
    if (typeof value !== "object" || value === null || !Object.hasOwn(value, part)) return undefined;
    value = (value as Record<PropertyKey, unknown>)[part];
  }
  return value;
}

function lowerFirst(text: string): string {
  return text.charAt(0).toLowerCase() + text.slice(1);
}
