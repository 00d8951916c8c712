// The `test` script: build, lint, type check, then both vitest projects. Ends with one line: `N passed, N failed`.
import { spawn } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("..", import.meta.url));
const require = createRequire(import.meta.url);
const reports = mkdtempSync(join(tmpdir(), "moorline-test-"));
/** Extra words narrow the vitest runs to files that match, for work on one of them; the checks run all the same. */
const filters = process.argv.slice(2);

function bin(packageName, path) {
  return join(dirname(require.resolve(`${packageName}/package.json`, { paths: [root] })), path);
}

function run(args) {
  return new Promise((resolve) => {
    const child = spawn(process.execPath, args, { cwd: root, stdio: "inherit" });
    child.once("error", () => resolve(1));
    child.once("close", (code) => resolve(code ?? 1));
  });
}

const groups = [];

async function check(name, args) {
  const started = Date.now();
  const ok = (await run(args)) === 0;
  groups.push({ name, passed: ok ? 1 : 0, failed: ok ? 0 : 1, seconds: (Date.now() - started) / 1_000 });
  return ok;
}

async function vitest(project) {
  const started = Date.now();
  const report = join(reports, `${project}.json`);
  const code = await run([
    bin("vitest", "vitest.mjs"),
    "run",
    "--project",
    project,
    "--reporter=default",
    "--reporter=json",
    `--outputFile.json=${report}`,
    ...(filters.length > 0 ? ["--passWithNoTests", ...filters] : []),
  ]);
  groups.push({ name: project, ...counts(report, code), seconds: (Date.now() - started) / 1_000 });
}

/** Tests that passed and failed. A file that could not be loaded, and a run that failed without saying where, count as one failure each. */
function counts(report, code) {
  let result;
  try {
    result = JSON.parse(readFileSync(report, "utf8"));
  } catch {
    return { passed: 0, failed: 1 };
  }
  const broken = result.testResults.filter(
    (file) => file.status === "failed" && !file.assertionResults.some((t) => t.status === "failed"),
  );
  const failed = result.numFailedTests + broken.length;
  const nothingRan = result.numPassedTests + failed === 0 && filters.length === 0;
  return { passed: result.numPassedTests, failed: failed === 0 && (code !== 0 || nothingRan) ? 1 : failed };
}

try {
  const built =
    (await check("kernel", [join(root, "packages/sketch/scripts/build-kernel.mjs")])) &&
    (await check("build", [bin("typescript", "bin/tsc"), "-b"]));
  await check("test types", [bin("typescript", "bin/tsc"), "-p", "tsconfig.tests.json"]);
  await check("lint", [bin("@biomejs/biome", "bin/biome"), "check", "."]);
  await check("imports", [join(root, "test/lint/imports.mjs")]);
  if (built) {
    await vitest("unit");
    await vitest("whole");
  }
} finally {
  rmSync(reports, { recursive: true, force: true });
}

const total = (key) => groups.reduce((sum, group) => sum + group[key], 0);
console.log("");
for (const group of groups) {
  console.log(
    `${group.name}: ${group.passed} passed, ${group.failed} failed (${group.seconds.toFixed(1)} s)`,
  );
}
console.log(`${total("passed")} passed, ${total("failed")} failed`);
process.exitCode = total("failed") > 0 || total("passed") === 0 ? 1 : 0;
