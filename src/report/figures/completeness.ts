import type { WindowValue } from "../../aggregate/result.ts";
import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent, px } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";

/** How much of each window was observed. */
export function completeness(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const left = size.names;
  const rows = input.covariates.filter((one) => one.values.some((value) => value.daysDue > 0));
  const n = input.intervals.length;
  if (rows.length === 0 || n === 0) return undefined;
  const cell = Math.max(size.narrow ? 6 : 12, Math.min(40, (size.width - left - 20) / n));
  const high = rows.length > 40 ? 12 : 20;
  const top = 26;
  const all = rows.flatMap((one) => one.values).filter((one) => one.daysDue > 0);
  const full = all.filter((one) => one.daysCovered >= one.daysDue).length;
  const missing = all.filter((one) => Number.isNaN(one.value)).length;
  const body = [
    input.intervals.map((one, t) =>
      cell < 18 && t % 5 !== 0
        ? html``
        : label(left + (t + 0.5) * cell, 17, String(one.index + 1), {
            anchor: "middle",
            fill: "muted",
            size: 11,
          }),
    ),
    label(left - 12, 17, "interval", { anchor: "end", fill: "muted" }),
    rows.map((row, r) => {
      const member = cast.byName.get(row.name);
      const y = top + r * high;
      return belongs(member, [
        member !== undefined && marker(member.theme, left - 18, y + high / 2, 4),
        label(left - 30, y + high / 2 + 4, fitted(row.name, left - 34), {
          anchor: "end",
          size: high < 16 ? 10 : 12,
        }),
        row.values.map((value, t) => square(value, left + t * cell + 1.5, y + 2, cell - 3, high - 4)),
      ]);
    }),
  ];
  return {
    name: "completeness",
    title: "How complete the windows are",
    caption:
      "One cell per covariate and interval, numbered as on the ribbon: filled from below to the share of its days that were observed. A cross is a value that the rule of completeness refused; a dot is a sum scaled up to the whole window.",
    svg: drawing(
      left + n * cell + 10,
      top + rows.length * high + 8,
      "How complete the windows are",
      `${counted(all.length, "window")}: ${full} fully observed (${percent(full / all.length)}), ${missing} without a value`,
      body,
    ),
  };
}

function square(value: WindowValue, x: number, y: number, width: number, height: number): Html {
  if (value.daysDue === 0) return html``;
  const share = Math.min(1, Math.max(0, value.daysCovered / value.daysDue));
  const missing = Number.isNaN(value.value);
  const [cx, cy] = [x + width / 2, y + height / 2];
  return html`<rect x="${px(x)}" y="${px(y)}" width="${px(width)}" height="${px(height)}" fill="${ink("wash")}"/><rect x="${px(x)}" y="${px(y + height * (1 - share))}" width="${px(width)}" height="${px(height * share)}" fill="${ink(missing ? "rule" : "more")}" opacity="${missing ? 1 : 0.75}"/>${
    missing
      ? html`${segment(cx - 4, cy - 4, cx + 4, cy + 4, "less", 2)}${segment(cx - 4, cy + 4, cx + 4, cy - 4, "less", 2)}`
      : value.scaled && html`<circle cx="${px(cx)}" cy="${px(cy)}" r="2.5" fill="${ink("panel")}"/>`
  }`;
}
