import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import type { Section } from "../parts.ts";
import { tableDetails } from "../table-html.ts";

function tables(input: ReportInput): Html {
  return html`<h3 id="tables">All tables</h3>${
    input.tables.length === 0
      ? html`<p>This run has no tables.</p>`
      : html`<p>Numbers are rounded to 4 significant digits here; the files beside this page, and a copy as CSV, hold every digit.</p>${input.tables.map(tableDetails)}`
  }`;
}

export function recordSection(input: ReportInput): Section {
  return {
    id: "record",
    title: "Run record",
    body: html`<p>What was run, on which files, with which seed: enough to make this page again. Made with covey ${input.version}.</p><details><summary>Run record</summary><div class="in"><pre>${input.record}</pre></div></details>${tables(input)}`,
  };
}
