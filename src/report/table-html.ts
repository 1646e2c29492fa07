import type { Cell, Table, TableColumn } from "../tables/table.ts";
import { unitText } from "./cast.ts";
import { type Html, html } from "./html.ts";
import { counted, show, whole } from "./numbers.ts";

/** Rows that go onto the page; the file has them all. */
export const MOST_ROWS = 250;
/** Columns beyond which a table is only named, since nobody reads it on a page. */
export const MOST_COLUMNS = 60;
/** Cells that go onto the page of one table. */
export const MOST_CELLS = 2500;

/** One output table, closed until it is asked for. */
export function tableDetails(table: Table): Html {
  const columns = table.columns.slice(0, MOST_COLUMNS);
  const rows = table.rows.slice(0, Math.min(MOST_ROWS, Math.ceil(MOST_CELLS / columns.length)));
  const cut =
    rows.length < table.rows.length || columns.length < table.columns.length
      ? html`<p>Shown: ${counted(rows.length, "row")} of ${whole(table.rows.length)}, ${counted(columns.length, "column")} of ${whole(table.columns.length)}; the file holds the whole table.</p>`
      : undefined;
  return html`<details><summary>${table.title}<small>${counted(table.rows.length, "row")}, file <code>${table.name}</code></small></summary><div class="in"><p>${table.description}</p>${cut}<div class="scroll" tabindex="0" role="group" aria-label="${table.title}"><table data-name="${table.name}"><thead><tr>${columns.map(head)}</tr></thead><tbody>${rows.map((row) => html`<tr>${columns.map((column, i) => cell(row[i], column))}</tr>`)}</tbody></table></div></div></details>`;
}

function head(column: TableColumn): Html {
  const unit = column.unit === undefined ? "" : unitText(column.unit);
  return html`<th scope="col"${numeric(column) && html` class="n"`} title="${column.description}">${column.title}${unit !== "" && html` <small>${unit}</small>`}</th>`;
}

function numeric(column: TableColumn): boolean {
  return column.type === "number" || column.type === "integer";
}

/** What is shown is rounded; the full number goes along for the copy as CSV. */
function cell(value: Cell, column: TableColumn): Html {
  if (value === undefined || (typeof value === "number" && Number.isNaN(value)))
    return html`<td${numeric(column) && html` class="n"`} data-v=""></td>`;
  if (typeof value === "boolean") return html`<td data-v="${String(value)}">${value ? "yes" : "no"}</td>`;
  if (typeof value === "string") return html`<td>${value}</td>`;
  const text = column.type === "integer" ? whole(value) : show(value);
  return html`<td class="n"${text !== String(value) && html` data-v="${String(value)}"`}>${text}</td>`;
}
