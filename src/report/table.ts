import { html, type Content, type Html } from './html.js';

export interface Column<T> {
  readonly head: Content;
  /** Numbers stand to the right, words to the left. */
  readonly kind?: 'number' | 'words';
  /** The column that names the row. */
  readonly names?: boolean;
  cell(row: T): Content;
}

/** A table with caption and headers that a screen reader can follow; the sentence `none` where there are no rows. */
export function table<T>(rows: readonly T[], columns: readonly Column<T>[], about: { caption: Content; none: string }): Html {
  if (rows.length === 0) return html`<p class="none">${about.none}</p>`;
  const align = ({ kind }: Column<T>): string => (kind === 'number' ? 'num' : 'txt');
  return html`
<div class="scroll"><table>
<caption>${about.caption}</caption>
<thead><tr>${columns.map((column) => html`<th scope="col" class="${align(column)}">${column.head}</th>`)}</tr></thead>
<tbody>${rows.map((row) => html`<tr>${columns.map((column) => (column.names
    ? html`<th scope="row" class="${align(column)}">${column.cell(row)}</th>`
    : html`<td class="${align(column)}">${column.cell(row)}</td>`))}</tr>`)}</tbody>
</table></div>`;
}
