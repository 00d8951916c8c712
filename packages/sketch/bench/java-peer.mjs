// The Java reference (com.tdunning:t-digest) as a process that answers one line with one line.
import { execFileSync, spawn } from "node:child_process";
import { existsSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { homedir, tmpdir } from "node:os";
import { join } from "node:path";
import { createInterface } from "node:readline";
import { fileURLToPath } from "node:url";

export const JAVA_ARTIFACT = "com.tdunning:t-digest:3.3";
const PLUGIN = "org.apache.maven.plugins:maven-dependency-plugin:3.6.1:copy";

function jarFile() {
  const folder = join(process.env.XDG_CACHE_HOME ?? join(homedir(), ".cache"), "moorline");
  const jar = join(folder, "t-digest-3.3.jar");
  if (!existsSync(jar)) {
    mkdirSync(folder, { recursive: true });
    const options = ["-q", "-B", PLUGIN, `-Dartifact=${JAVA_ARTIFACT}`, `-DoutputDirectory=${folder}`];
    execFileSync("mvn", options, { stdio: ["ignore", 2, 2] });
  }
  return jar;
}

export function startJava() {
  const jar = jarFile();
  const folder = mkdtempSync(join(tmpdir(), "sketch-java-"));
  const source = fileURLToPath(new URL("./java/TDigestHarness.java", import.meta.url));
  execFileSync("javac", ["-cp", jar, "-d", folder, source], { stdio: ["ignore", 2, 2] });
  const child = spawn("java", ["-Xmx1g", "-cp", `${jar}:${folder}`, "TDigestHarness"], {
    stdio: ["pipe", "pipe", 2],
  });
  const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
  const ask = async (line) => {
    child.stdin.write(`${line}\n`);
    const { value, done } = await lines.next();
    if (done) throw new Error(`the Java process ended at: ${line.slice(0, 60)}`);
    return value;
  };
  const load = (sample) => {
    const path = join(folder, "sample.bin");
    writeFileSync(path, new Uint8Array(sample.buffer, sample.byteOffset, sample.byteLength));
    return ask(`load ${path}`);
  };
  const stop = () => {
    child.stdin.end();
    rmSync(folder, { recursive: true, force: true });
  };
  return { ask, load, stop };
}
