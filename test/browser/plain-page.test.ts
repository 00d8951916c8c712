import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CHROMIUM_FLAGS, CliChild, chromiumPath, freePort } from "../real-parts/index.js";

// The plain page on the running demo, in a real Chromium. Not covered here: anything that needs a drift (journeys/demo, journeys/prometheus-alert).

let folder: string;
let demo: CliChild;
let browser: Browser;
let base: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "moorline-page-"));
  const port = await freePort();
  base = `http://127.0.0.1:${port}`;
  demo = new CliChild(["run", "--demo"], {
    cwd: folder,
    env: {
      MOORLINE_DEMO_DIR: join(folder, "demo"),
      MOORLINE_GATEWAY_PORT: String(port),
    },
  });
  browser = await chromium.launch({ executablePath: chromiumPath(), args: [...CHROMIUM_FLAGS] });
  const deadline = Date.now() + 90_000;
  while ((await evaluatedFeatures()) < 7) {
    if (Date.now() > deadline || !demo.running)
      throw new Error(`the demo shows no features: ${demo.lastOutput}`);
    await sleep(500);
  }
}, 120_000);

afterAll(async () => {
  await browser?.close();
  await demo?.end("SIGINT");
  await rm(folder, { recursive: true, force: true });
});

async function evaluatedFeatures(): Promise<number> {
  const response = await fetch(`${base}/v1/streams/chill-risk/features?slice=all`).catch(() => null);
  if (response === null || !response.ok) return 0;
  return ((await response.json()) as { features: unknown[] }).features.length;
}

async function open(
  path: string,
  options: { colorScheme?: "dark" | "light"; width?: number } = {},
): Promise<{ page: Page; faults: string[] }> {
  const context = await browser.newContext({
    colorScheme: options.colorScheme ?? "light",
    viewport: { width: options.width ?? 1_200, height: 900 },
  });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on("pageerror", (error) => faults.push(error.message));
  page.on("console", (message) => {
    if (message.type() === "error") faults.push(message.text());
  });
  await page.goto(`${base}${path}`);
  return { page, faults };
}

describe("the plain page", () => {
  it("lists every feature of the demo with a state in words, says that the data is invented, and breaks no policy", async () => {
    const { page, faults } = await open("/");
    const rows = await page.locator("tbody tr").allInnerTexts();
    expect(rows).toHaveLength(7);
    for (const row of rows) expect(row).toMatch(/holding|straining|adrift|thin|silent/);
    expect(await page.locator(".notice").textContent()).toContain("invented");
    expect(await page.locator("footer").textContent()).toContain("Drift is not proof of harm");
    expect(faults).toEqual([]);
  });

  it("opens a feature's Q-Q plot by keyboard alone, and the figures equal those of the API for the same link", async () => {
    const { page, faults } = await open("/");
    const link = page.getByRole("link", { name: "cargo_temp" });
    for (
      let tabs = 0;
      tabs < 40 && !(await link.evaluate((node) => node === document.activeElement));
      tabs++
    ) {
      await page.keyboard.press("Tab");
    }
    await page.keyboard.press("Enter");
    await page.waitForURL(/cargo_temp/);
    expect(await page.getByRole("heading", { level: 1 }).textContent()).toBe("cargo_temp (°C)");
    const json = await page.getByRole("link", { name: "JSON" }).getAttribute("href");
    const answer = (await (await fetch(`${base}${json}`)).json()) as {
      reading: string;
      pairs: { production: number | null }[];
    };
    expect(await page.locator(".reading").textContent()).toBe(answer.reading);
    const drawn = answer.pairs.filter((pair) => pair.production !== null).length;
    // The Q-Q plot, and the shift function under it.
    for (const plot of [0, 1])
      expect(await page.locator(".plot").nth(plot).locator("svg .mark").count()).toBe(drawn);
    const told = await page.locator("main, body").first().textContent();
    expect(told).toMatch(/Since when: /);
    expect(told).toMatch(/Which slice: /);
    expect(faults).toEqual([]);
  });

  it.each([
    ["dark", 1_200],
    ["light", 390],
  ] as const)("fits and can be read in %s at %d pixels", async (colorScheme, width) => {
    const { page } = await open("/streams/chill-risk/features/cargo_temp", { colorScheme, width });
    const overflow = await page.evaluate(
      () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
    );
    expect(overflow).toBeLessThanOrEqual(0);
    const [paper, ink] = await page.evaluate(() => {
      const style = getComputedStyle(document.body);
      return [style.backgroundColor, style.color];
    });
    expect(contrast(paper!, ink!)).toBeGreaterThan(7);
  });
});

/** WCAG 2 contrast ratio of two `rgb(r, g, b)` colours. */
function contrast(a: string, b: string): number {
  const luminance = (color: string) => {
    const [r, g, blue] = color.match(/\d+/g)!.map((part) => {
      const share = Number(part) / 255;
      return share <= 0.03928 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4;
    }) as [number, number, number];
    return 0.2126 * r + 0.7152 * g + 0.0722 * blue;
  };
  const [light, dark] = [luminance(a), luminance(b)].toSorted((x, y) => y - x) as [number, number];
  return (light + 0.05) / (dark + 0.05);
}
