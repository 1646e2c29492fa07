import type { Finding, FindingKind, Severity } from "../../data/finding.ts";
import { placeText } from "../../errors.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, sentence, whole } from "../numbers.ts";
import type { Section } from "../parts.ts";

/** Findings of one kind that go onto the page; the table in the files holds them all. */
const MOST = 100;

const WORDS: Readonly<Record<FindingKind, string>> = {
  gap: "Gaps in records",
  duplicate: "Repeated rows",
  "bad-value": "Values that cannot be read",
  "bad-date": "Dates that cannot be read",
  sentinel: "Declared missing values",
  unit: "Units",
  "unknown-station": "Stations not in the list",
  "capture-outside": "Captures outside every occasion",
  "capture-repeat": "Repeated captures within an occasion",
  "capture-after-loss": "Captures after loss",
  "strata-conflict": "Animals in two strata",
  "never-recaptured": "Never seen again",
  "layer-gap": "Missing layers",
  "layer-overlap": "Overlapping layers",
  "layer-valid-area": "Layers with too little valid area",
  "place-outside": "Places outside a layer",
  "window-empty": "Intervals without a window",
  "window-leak": "Windows beyond their interval",
  incomplete: "Incomplete windows",
  "changing-stations": "Changing sets of stations",
  "constant-column": "Covariates that do not vary",
  "incomplete-column": "Covariates with missing intervals",
  correlated: "Close correlations",
  inflated: "Variance inflation",
  "ill-conditioned": "Ill-conditioned combinations",
  "exact-dependency": "Exact dependencies",
  "at-bound": "Estimates at a bound",
  "not-separable": "What the data cannot tell apart",
  "recapture-varies": "Recapture varies",
  infilled: "Infilled values",
  flagged: "Values flagged at the source",
  "flat-run": "Long runs of one value",
  accumulated: "Totals of several days",
  "part-day": "Days with missing readings",
  moved: "Stations that moved",
  "layer-small-place": "Places smaller than a pixel",
  "layer-bounds": "Bounds of layers",
  "layer-methods": "Values formed otherwise",
  "layer-quality": "Images without quality",
  "few-fixes": "Too few positions",
  spike: "Spikes",
  excepted: "Exceptions made",
  transience: "Animals seen once and never again",
  "trap-dependence": "Animals that shun or seek being caught",
  "out-of-range": "Values beyond the recorded range",
  "definition-differs": "Definitions that differ from the record",
};

const SEVERITIES: Readonly<Record<Severity, string>> = {
  stop: "stops the run",
  warn: "warning",
  accept: "accepted",
};

export function findingsSection(input: ReportInput): Section {
  const head = { id: "findings", title: "Findings" };
  if (input.findings.length === 0)
    return { ...head, body: html`<p>Nothing was found that a person should know.</p>` };
  const kinds = new Map<FindingKind, Finding[]>();
  for (const one of input.findings) kinds.set(one.kind, [...(kinds.get(one.kind) ?? []), one]);
  return {
    ...head,
    body: html`<p>${counted(input.findings.length, "thing")} to know about the data and the models, in ${counted(kinds.size, "kind")}. Each says where it was found and what can be done. A gap in the records is no reason to disturb a site once more.</p><div class="findings">${[...kinds].map(([kind, found]) => group(kind, found))}</div>`,
  };
}

function group(kind: FindingKind, found: readonly Finding[]): Html {
  const shown = found.slice(0, MOST);
  const words = WORDS[kind];
  const worst: Severity =
    (["stop", "warn", "accept"] as const).find((one) => found.some((finding) => finding.severity === one)) ??
    "accept";
  return html`<details data-kind="${kind}"${found.length <= 6 && html` open`}><summary>${words}<small>${whole(found.length)}, ${SEVERITIES[worst]}</small></summary><div class="in"><ul class="found">${shown.map(item)}</ul>${shown.length < found.length && html`<p>The first ${shown.length} of ${whole(found.length)}; the table of findings in the files holds them all.</p>`}</div></details>`;
}

function item(one: Finding): Html {
  const value = one.value === undefined ? undefined : html`; value <code>${one.value}</code>`;
  const times = one.count === undefined || one.count === 1 ? undefined : `; count ${whole(one.count)}`;
  return html`<li><div><p><b>${one.subject}</b></p>${one.where !== undefined && html`<p><code>${placeText(one.where)}</code></p>`}</div><div><p>${one.message}</p><p class="do"><span class="severity ${one.severity}">${sentence(SEVERITIES[one.severity])}</span>${value}${times}. To do: ${one.remedy}.</p></div></li>`;
}
