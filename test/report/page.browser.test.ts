import { existsSync, readFileSync } from "node:fs";
import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { ReportInput } from "../../src/report/input.ts";
import { renderPage } from "../../src/report/page.ts";
import { reportInput } from "./fixture.ts";

const FOUND = ["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"].find((path) =>
  existsSync(path),
);
// What runs in the page is text here: the compiler knows no document on this side.
const FOCUSED = `(() => {
  const one = document.activeElement;
  return one.tagName + " " + (one.getAttribute("href") || "") + " " + getComputedStyle(one).outlineStyle;
})()`;
const AXE = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");
/** Milliseconds that a busy machine may take for one step; a page that does not answer at all still ends the test. */
const SLOWEST = 120_000;
/** Asks again until the page has drawn what a key or the pointer brought about. */
const settled = <T>(ask: () => Promise<T>) => expect.poll(ask, { timeout: SLOWEST });
/** Markup, the end of a script, and a mark that turns the direction of writing. */
const HOSTILE = `<img src=x onerror="document.title='broken in'"></script>\u202e`;

/** The same study, in which counting animals chose one covariate fewer than counting years. */
function differing(input: ReportInput): ReportInput {
  const { screened } = input;
  if (screened === undefined) return input;
  const names = screened.byYears.names.slice(0, 1);
  return { ...input, screened: { ...screened, byAnimals: { ...screened.byYears, names } } };
}

describe.runIf(FOUND !== undefined)("the page in a browser", () => {
  let browser: Browser;
  let folder: string;
  let address: string;
  let hostile: string;
  const said: string[] = [];
  const asked: string[] = [];

  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), "covey-page-"));
    const put = async (name: string, html: string) => {
      await writeFile(join(folder, name), html);
      return pathToFileURL(join(folder, name)).href;
    };
    address = await put("page.html", await renderPage(differing(await reportInput({ permutations: 3 }))));
    hostile = await put(
      "hostile.html",
      await renderPage(await reportInput({ hostile: HOSTILE, permutations: 0 })),
    );
    browser = await chromium.launch({
      ...(FOUND === undefined ? {} : { executablePath: FOUND }),
      args: [
        "--no-sandbox",
        "--disable-gpu",
        "--disable-quic",
        "--no-first-run",
        "--disable-background-networking",
        "--disable-component-update",
        "--disable-sync",
      ],
    });
  }, 240_000);

  afterAll(async () => {
    await browser?.close();
    await rm(folder, { recursive: true, force: true });
  });

  async function open(width: number, where = address, script = true): Promise<Page> {
    const context = await browser.newContext({ viewport: { width, height: 900 }, javaScriptEnabled: script });
    context.setDefaultTimeout(SLOWEST);
    const page = await context.newPage();
    page.on("console", (message) => said.push(message.text()));
    page.on("pageerror", (error) => said.push(error.message));
    page.on("request", (request) => asked.push(request.url()));
    await page.goto(where);
    return page;
  }

  test.each([1400, 900, 420])("at %d pixels nothing makes the page wider than the window", async (width) => {
    const page = await open(width);
    const wide = await page.evaluate<readonly [number, number]>(
      "[document.documentElement.scrollWidth, document.documentElement.clientWidth]",
    );
    expect(wide[0]).toBeLessThanOrEqual(wide[1]);
    await page.context().close();
  });

  test("a covariate is lit everywhere by keyboard, held by Enter, let go by Escape", async () => {
    const page = await open(1400);
    const first = page.locator("#inputs td .cov[role=button]").first();
    await first.focus();
    const index = await first.getAttribute("data-covariate");
    await settled(() => page.locator("body.lit").count()).toBe(1);
    const lit = await page.locator(`[data-covariate="${index}"].on`).count();
    expect(lit).toBe(await page.locator(`[data-covariate="${index}"]`).count());
    expect(
      await page
        .locator(
          `#figure-coefficient-paths [data-covariate="${index}"].on, #figure-correlation [data-covariate="${index}"].on, #figure-time-ribbon [data-covariate="${index}"].on`,
        )
        .count(),
    ).toBeGreaterThan(1);
    await page.keyboard.press("Enter");
    await settled(() => first.getAttribute("aria-pressed")).toBe("true");
    await page.locator("h1").hover();
    expect(await page.locator("body.lit").count()).toBe(1);
    await page.keyboard.press("Escape");
    await settled(() => page.locator("body.lit").count()).toBe(0);
    await page.context().close();
  });

  test("pointed at, a covariate is lit in path, correlation (row and column), series, map and tables", async () => {
    const page = await open(1400);
    const name = page.locator("#inputs td .cov[role=button]").first();
    const index = await name.getAttribute("data-covariate");
    await name.hover();
    await settled(() => page.locator("body.lit").count()).toBe(1);
    for (const place of ["coefficient-paths", "covariate-values", "observed-series", "time-ribbon", "map"]) {
      const lit = page.locator(
        `#figure-${place} [data-covariate="${index}"].on, #figure-${place} [data-covariates~="${index}"].on`,
      );
      expect([place, (await lit.count()) > 0]).toEqual([place, true]);
    }
    const cells = page.locator("#figure-correlation [data-covariates]");
    const ofOne = page.locator(`#figure-correlation [data-covariates~="${index}"]`);
    const lit = page.locator("#figure-correlation [data-covariates].on");
    expect(await lit.count()).toBe(await ofOne.count());
    // K covariates have K(K − 1)/2 squares; each is in K − 1 of them, and once more as a number
    const K = (1 + Math.sqrt(1 + 4 * (await cells.count()))) / 2;
    expect(await ofOne.count()).toBe(2 * (K - 1));
    expect(await page.locator(`#inputs tr.on`).count()).toBe(1);
    await page.context().close();
  });

  test("years and animals are switched everywhere at once, by keyboard; both are printed", async () => {
    const page = await open(1400);
    const seen = async () => [
      await page.locator("#figure-survival").isVisible(),
      await page.locator("#figure-survival-by-animals").isVisible(),
      await page.getByText("What the choice by animals says, refitted without penalty").isVisible(),
    ];
    expect(await seen()).toEqual([true, false, false]);
    await page.locator("#survival fieldset input").first().focus();
    await page.keyboard.press("ArrowRight");
    await settled(seen).toEqual([false, true, true]);
    expect(await page.locator("#screen fieldset input[value=animals]").isChecked()).toBe(true);
    await page.emulateMedia({ media: "print" });
    await settled(seen).toEqual([true, true, true]);
    expect(await page.locator("fieldset").first().isVisible()).toBe(false);
    expect(await page.locator("#figure-correlation-detrended").isVisible()).toBe(true);
    await page.context().close();
  });

  test("Tab reaches the skip link, the sections and beyond, always where it can be seen", async () => {
    const page = await open(1400);
    const reached: string[] = [];
    for (let i = 0; i < 24; i++) {
      await page.keyboard.press("Tab");
      reached.push(await page.evaluate<string>(FOCUSED));
    }
    expect(reached[0]).toBe("A #verdict solid");
    expect(reached).toContain("A #record solid");
    expect(reached.some((one) => one.startsWith("SPAN"))).toBe(true);
    expect(reached.filter((one) => one.endsWith("none"))).toEqual([]);
    await page.context().close();
  });

  test("walking the path changes which covariates stand; findings are filtered by kind", async () => {
    const page = await open(900);
    const range = page.locator(".walk input");
    const before = await page.locator(".walk output").textContent();
    await range.focus();
    await page.keyboard.press("Home");
    await settled(() => page.locator(".walk output").textContent()).toContain("no covariate stands");
    expect(before).toContain("(chosen)");
    expect(await page.locator(".walk .stands").count()).toBe(0);
    const flat = await page.locator(".walk svg[role=img] path").last().getAttribute("d");
    await page.keyboard.press("End");
    await settled(() => page.locator(".walk .stands").count()).toBeGreaterThan(2);
    expect(await page.locator(".walk svg[role=img] path").last().getAttribute("d")).not.toBe(flat);
    expect(await page.locator(".walk svg[role=img]").first().getAttribute("aria-label")).toMatch(
      /from 0?\.?\d+ to 0?\.?\d+/,
    );
    // the line in the two figures along the path has moved to their right edge
    expect(
      await page.locator("#figure-criterion [stroke-dasharray='3 3']").getAttribute("transform"),
    ).toMatch(/^translate\(700,/);
    await page.getByLabel("Show", { exact: false }).and(page.locator("select")).selectOption("duplicate");
    await settled(() => page.locator(".findings > details:visible").count()).toBe(1);
    await page.getByLabel("Show", { exact: false }).and(page.locator("select")).selectOption("");
    await page.getByLabel("Severity").selectOption("accept");
    await settled(() => page.locator(".findings .severity.warn:visible").count()).toBe(0);
    expect(await page.locator("#findings output").textContent()).toBe(
      `${await page.locator(".findings .severity.accept").count()} shown`,
    );
    await page.context().close();
  });

  test("a table is copied as CSV with every digit", async () => {
    const page = await open(1400);
    await page.evaluate(
      "Object.defineProperty(navigator, 'clipboard', { value: { writeText: async (text) => { document.body.dataset.copied = text; } } })",
    );
    await page.locator("#record summary").nth(1).click();
    await page.locator("#record button.copy").first().click();
    const copied = () => page.evaluate<string | undefined>("document.body.dataset.copied");
    await settled(copied).toBeTypeOf("string");
    const rows = (await copied())?.trim().split("\r\n") ?? [];
    expect(rows).toHaveLength(21);
    const cells = rows[1].split(",");
    expect(cells[1]).toMatch(/^-?\d+\.\d{6,}$/);
    await page.context().close();
  });

  test.each([
    ["light", 1400],
    ["dark", 420],
  ] as const)("axe finds nothing, %s at %d pixels", { timeout: 240_000 }, async (colorScheme, width) => {
    const context = await browser.newContext({
      viewport: { width, height: 900 },
      colorScheme,
      // only so that the checker itself can be put into the page
      bypassCSP: true,
    });
    context.setDefaultTimeout(SLOWEST);
    const page = await context.newPage();
    await page.goto(address);
    await page.evaluate(
      "document.querySelectorAll('.findings details').forEach((one) => { one.open = true; })",
    );
    await page.evaluate(AXE);
    const { passes, violations } = await page.evaluate<{
      readonly passes: readonly unknown[];
      readonly violations: readonly { readonly id: string; readonly nodes: readonly { html: string }[] }[];
    }>("axe.run(document, { resultTypes: ['violations'] })");
    expect(violations.map(({ id, nodes }) => [id, nodes[0].html])).toEqual([]);
    expect(passes.length).toBeGreaterThan(30);
    await context.close();
  });

  test("without JavaScript the page is whole", async () => {
    const page = await open(900, address, false);
    expect(await page.locator("section").count()).toBe(15);
    expect(await page.locator("figure svg").first().isVisible()).toBe(true);
    expect(await page.locator(".walk").isVisible()).toBe(false);
    for (const option of await page.locator(".option").all()) expect(await option.isVisible()).toBe(true);
    expect(await page.locator("details summary").first().isVisible()).toBe(true);
    await page.context().close();
  });

  test("names that look like markup run nothing and widen nothing", async () => {
    const page = await open(420, hostile);
    expect(await page.evaluate<number>("document.documentElement.scrollWidth")).toBeLessThanOrEqual(420);
    expect(await page.title()).toBe(HOSTILE);
    expect(await page.locator("img").count()).toBe(0);
    expect(await page.locator("h1").textContent()).toBe(HOSTILE);
    await page.context().close();
  });

  test("nothing was said on the console and nothing asked of the network", () => {
    expect(said).toEqual([]);
    expect(asked.length).toBeGreaterThan(0);
    expect(asked.filter((url) => !url.startsWith("file:") && !url.startsWith("data:"))).toEqual([]);
  });
});
