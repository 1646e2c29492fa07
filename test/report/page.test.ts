import { beforeAll, describe, expect, test } from "vitest";
import { failedAnalysis, summariseSensitivity } from "../../src/compare/sensitivity.ts";
import type { Figure } from "../../src/report/figure.ts";
import { figures } from "../../src/report/figures.ts";
import type { ReportInput } from "../../src/report/input.ts";
import { renderPage } from "../../src/report/page.ts";
import { reportInput } from "./fixture.ts";

const HOSTILE = `<img src=x onerror="alert(1)"></script><b>&amp;'`;

let input: ReportInput;
let drawn: readonly Figure[];
let page: string;

beforeAll(async () => {
  input = await reportInput({ permutations: 3 });
  drawn = await figures(input);
  page = await renderPage(input, drawn);
});

/** All attribute values of a name. */
const attributes = (html: string, name: string) =>
  [...html.matchAll(new RegExp(`\\s${name}="([^"]*)"`, "g"))].map((match) => match[1]);

const sectionOf = (html: string, id: string) => {
  const from = html.indexOf(`<section id="${id}"`);
  return html.slice(from, html.indexOf("</section>", from));
};

describe("the page", () => {
  test("has every section, in order, and links to each", () => {
    const ids = [...page.matchAll(/<section id="([^"]+)"/g)].map((match) => match[1]);
    expect(ids).toEqual([
      "verdict",
      "time",
      "where",
      "inputs",
      "same-story",
      "components",
      "recapture",
      "screen",
      "survival",
      "comparison",
      "sensitivity",
      "detectable",
      "findings",
      "methods",
      "record",
    ]);
    for (const id of ids) expect(page).toContain(`<a href="#${id}">`);
  });

  test("says the verdict's four sentences at the top, as they were made", () => {
    const verdict = input.comparison?.verdict;
    const top = sectionOf(page, "verdict")
      .replaceAll("&#39;", "'")
      .replaceAll("&quot;", '"')
      .replaceAll("\u00a0", " ");
    for (const sentence of [verdict?.headline, verdict?.animals, verdict?.agreement, verdict?.caution])
      expect(top).toContain(sentence);
    expect(top).toContain(`<b>${verdict?.grade}</b>`);
  });

  test("shows F only for candidates that were fixed before looking", () => {
    const candidates = input.comparison?.candidates ?? [];
    const chosen = candidates.filter((one) => one.chosenOnData);
    expect(chosen.length).toBeGreaterThanOrEqual(2);
    const table = sectionOf(page, "comparison");
    expect(table.split("chosen on these data</small>").length - 1).toBe(chosen.length);
    // such a candidate has an F as a number, and it must not be on the page
    for (const one of chosen) {
      expect(Number.isFinite(one.deviance.f)).toBe(true);
      expect(table).not.toContain(`${one.deviance.f.toPrecision(4)} <small>`);
    }
    const fixed = candidates.filter((one) => !one.chosenOnData && Number.isFinite(one.deviance.f));
    expect(fixed.length).toBeGreaterThan(0);
    for (const one of fixed) expect(table).toContain(`(${one.deviance.df1}, ${one.deviance.df2})`);
  });

  test("names file, line and remedy of findings", () => {
    const text = sectionOf(page, "findings");
    expect(text).toContain("stations/lowland_ash.csv:3043");
    expect(text).toContain("stations/upland.csv:2227:2");
    for (const one of input.findings.slice(0, 5)) expect(text).toContain(one.remedy);
  });

  test("same input, same bytes", async () => {
    expect((await renderPage(input)) === page).toBe(true);
  });

  test("is under 3 MB and reaches for nothing outside itself", () => {
    expect(page.length).toBeLessThan(3_000_000);
    for (const name of ["src", "href", "xlink:href", "action", "data"])
      for (const value of attributes(page, name)) expect(value).toMatch(/^(#|data:)/);
    expect(page).not.toMatch(/url\((?!#)/);
    expect(page).not.toMatch(/@import|https?:\/\//);
  });

  test("ids are unique, and every url(#…) and #… leads somewhere", () => {
    const ids = attributes(page, "id");
    expect(ids.filter((id, i) => ids.indexOf(id) !== i)).toEqual([]);
    const wanted = [...page.matchAll(/url\(#([^)]+)\)|href="#([^"]+)"/g)].map(
      (match) => match[1] ?? match[2],
    );
    for (const id of wanted) expect(ids).toContain(id);
  });

  test("every figure's picture has a label with numbers, and every covariate mark a covariate", () => {
    expect(drawn.map((one) => one.name)).toEqual([
      "time-ribbon",
      "map",
      "covariate-values",
      "observed-series",
      "completeness",
      "correlation",
      "correlation-detrended",
      "inflation",
      "component-variance",
      "component-loadings",
      "criterion",
      "coefficient-paths",
      "evidence",
      "chance",
      "survival",
      "survival-drivers",
      "effects",
    ]);
    for (const { name, title, caption, svg } of drawn) {
      expect(svg, name).toMatch(/^<svg [^>]*role="img" aria-label="[^"]*\d[^"]*"/);
      expect(svg.split('role="img"').length, name).toBe(2);
      expect(title + caption).not.toMatch(/undefined|NaN/);
      for (const index of attributes(svg, "data-covariate"))
        expect(Number(index), name).toBeLessThan(input.covariates.length);
      expect(page).toContain(`id="figure-${name}"`);
    }
    expect(drawn.find((one) => one.name === "coefficient-paths")?.svg).toContain("data-covariate=");
  });

  test("no number went missing into the text", () => {
    expect(page.replace(/<script>[\s\S]*?<\/script>/, "")).not.toMatch(/undefined|NaN|\[object/);
  });
});

describe("other studies", () => {
  test("names that look like markup stay text everywhere", async () => {
    const hostile = await reportInput({ hostile: HOSTILE, permutations: 0 });
    const shown = await figures(hostile);
    const text = await renderPage(hostile, shown);
    expect(text).not.toContain("<img src=x");
    // the closing tag of our own script and of the walk's numbers, and no other
    expect(text.split("</script>").length - 1).toBe(2);
    expect(text.split("&lt;img src=x").length - 1).toBeGreaterThan(10);
    for (const { name, svg } of shown) expect(svg, name).not.toContain("<img");
    const walk = /<script type="application\/json">([\s\S]*?)<\/script>/.exec(text);
    expect(JSON.parse(walk?.[1] ?? "{}").names).toContain(HOSTILE);
  });

  test("names and changes of other ways to do the study that look like markup stay text", async () => {
    const plain = await reportInput({ covariates: 4, permutations: 0 });
    const analysis = (name: string) => ({
      ...failedAnalysis(name, HOSTILE, HOSTILE),
      failed: name === "third" ? HOSTILE : undefined,
      candidates: plain.matrix.names,
      byYears: [plain.matrix.names[0]],
    });
    if (plain.comparison === undefined) throw new Error("the fixture compares");
    const sensitivity = summariseSensitivity([analysis("base"), analysis(HOSTILE), analysis("third")], []);
    const hostile = { ...plain, comparison: { ...plain.comparison, sensitivity } };
    const shown = await figures(hostile);
    const text = await renderPage(hostile, shown);
    expect(text).not.toContain("<img src=x");
    expect(text.split("</script>").length - 1).toBe(2);
    expect(sectionOf(text, "sensitivity").split("&lt;img src=x").length - 1).toBeGreaterThan(3);
    const figure = shown.find((one) => one.name === "sensitivity");
    expect(figure?.svg).toContain("&lt;img");
    expect(figure?.svg).not.toContain("<img");
  });

  test("a forced covariate moves the slider's curve where no candidate stands, and is named there", async () => {
    const walkOf = async (made: object) => {
      const text = await renderPage(
        await reportInput({ covariates: 4, strata: ["all"], permutations: 0, ...made }),
      );
      const from = text.indexOf('<div class="walk"');
      const data = /<script type="application\/json">([\s\S]*?)<\/script>/.exec(text.slice(from));
      return { text: text.slice(from, from + 20_000), data: JSON.parse(data?.[1] ?? "{}") };
    };
    const [free, forced] = [await walkOf({}), await walkOf({ trend: true })];
    expect(free.data.active[0]).toEqual([]);
    expect(new Set(free.data.survival[0]).size).toBe(1);
    expect(free.text).not.toContain("In the model at every penalty");
    expect(forced.data.active[0]).toEqual([]);
    expect(new Set(forced.data.survival[0]).size).toBeGreaterThan(5);
    // a linear trend on the logit scale: the survivals keep one order
    const ordered = [...forced.data.survival[0]].sort((a, b) => a - b);
    expect([ordered, ordered.toReversed()]).toContainEqual(forced.data.survival[0]);
    expect(forced.text).toContain('In the model at every penalty: <span class="cov">year trend</span>.');
  });

  test("a covariate set alone: a sentence where nothing was modelled", async () => {
    const alone = await reportInput({ survival: false });
    const text = await renderPage(alone);
    expect(sectionOf(text, "verdict")).toContain("No survival was modelled");
    for (const id of [
      "same-story",
      "components",
      "recapture",
      "screen",
      "survival",
      "comparison",
      "sensitivity",
      "detectable",
    ])
      expect(sectionOf(text, id), id).toMatch(/<p>[^<]+<\/p><\/section>|<p>[^<]+<\/p>$/);
    expect((await figures(alone)).map((one) => one.name)).not.toContain("correlation");
  });

  test.each([
    ["one covariate, one stratum", { covariates: 1, strata: ["all"], permutations: 0 }],
    ["no dates", { dated: false, permutations: 0 }],
    ["a counts table: no dates, places, windows or findings", { dated: false, bare: true, permutations: 0 }],
  ])("%s", async (_name, made) => {
    const text = await renderPage(await reportInput(made));
    expect(text).toContain('id="figure-time-ribbon"');
    expect(text.replace(/<script>[\s\S]*?<\/script>/, "")).not.toMatch(/undefined|NaN|\[object/);
  });

  test("a hundred covariates: under 3 MB, every one in the index", async () => {
    const many = await reportInput({ covariates: 100, permutations: 0 });
    const text = await renderPage(many);
    expect(text.length).toBeLessThan(3_000_000);
    const index = sectionOf(text, "inputs");
    for (const { name } of many.covariates) expect(index).toContain(`</svg>${name}</span>`);
  });
});
