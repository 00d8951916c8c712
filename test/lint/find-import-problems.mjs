import { ALLOWED_IMPORTS, PURE_PACKAGES } from "./allowed-imports.mjs";

const IMPORT = /(?:import|export)\s[^"';]*?from\s*["']([^"']+)["']|import\s*\(?\s*["']([^"']+)["']/g;
const PACKAGES = Object.keys(ALLOWED_IMPORTS).filter(
  (name) => !["collector", "evaluator", "gateway", "cli"].includes(name),
);

/** Every import that the table does not allow, as `file: sentence`. `files` are `{ path, text }` with paths from the repository root. */
export function findImportProblems(files) {
  return files.flatMap(({ path, text }) => {
    const found = /^(?:packages|services)\/([^/]+)\/(.+)$/.exec(path);
    if (found === null) return [];
    const [, name, inside] = found;
    return [...text.matchAll(IMPORT)]
      .map((match) => match[1] ?? match[2])
      .flatMap((specifier) => problemOf(name, inside, specifier).map((sentence) => `${path}: ${sentence}`));
  });
}

function problemOf(name, inside, specifier) {
  if (specifier.startsWith("node:")) return nodeProblem(name, inside, specifier);
  if (specifier.startsWith(".")) return relativeProblem(inside, specifier);
  const own = /^@moorline\/([^/]+)(\/.+)?$/.exec(specifier);
  if (own === null) return [];
  const [, target, deep] = own;
  const problems = [];
  if (deep !== undefined) problems.push(`${specifier} reaches past the package's index`);
  const allowed = ALLOWED_IMPORTS[name];
  if (allowed === undefined) return [`package ${name} is not in the table`];
  const whole = allowed.includes("*") && PACKAGES.includes(target);
  if (inside.startsWith("src/") && !whole && !allowed.includes(target))
    problems.push(`${name} may not import ${target}`);
  return problems;
}

function nodeProblem(name, inside, specifier) {
  const exempt = PURE_PACKAGES[name];
  if (
    exempt === undefined ||
    !inside.startsWith("src/") ||
    exempt.some((prefix) => inside.startsWith(prefix))
  )
    return [];
  return [`${name} is pure code, it may not import ${specifier}`];
}

/** A relative path may not leave the package: `src/a/b.ts` may climb two folders at the most. Tests may share what is in test/fixtures. */
function relativeProblem(inside, specifier) {
  if (!inside.startsWith("src/") && specifier.includes("/test/fixtures/")) return [];
  const depth = inside.split("/").length - 1;
  const climbs = specifier.split("/").filter((part) => part === "..").length;
  return climbs > depth ? [`${specifier} leaves the package`] : [];
}
