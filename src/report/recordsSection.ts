import { NONE, number } from './format.js';
import { html, type Html } from './html.js';
import { framePlace } from './places.js';
import { recordRemarks } from './recordRemarks.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

/** What each record says, how it was moved, and how well its place is known. */
export function recordsSection({ records, site }: ReportContent): Html | null {
  if (!records) return null;
  const { symbol } = framePlace(site, 0, 0);
  const remarks = recordRemarks(records).filter(({ kind }) => kind !== 'not placed');
  return html`
<section id="records">
<h2>Records</h2>
${table(records.placed, [
    { head: 'Record', names: true, cell: ({ recordId, source, row }) => html`<span class="word">${recordId}</span><br><small>${source}, row ${row}</small>` },
    { head: 'Datum', cell: ({ datum }) => datum },
    { head: 'Moved by', cell: ({ shift, group }) => html`${shift}${group && group.sharedSdM > 0 ? html`<br><small>shared error ${number(group.sharedSdM, 2)} m on each axis</small>` : ''}` },
    { head: 'Rests on', cell: ({ basis, note }) => html`${basis}${note ? html`<br><small>${note}</small>` : ''}` },
    { head: `Place, ${symbol}`, kind: 'number', cell: ({ x, y }) => { const place = framePlace(site, x, y); return html`E ${place.east}<br>N ${place.north}`; } },
    { head: '95 % half-axes, m', kind: 'number', cell: ({ semiMajM, semiMinM }) => `${number(semiMajM, 1)} × ${number(semiMinM, 1)}` },
    { head: 'Azimuth, °', kind: 'number', cell: ({ azimDeg }) => number(azimDeg) },
    { head: 'Blunder share', kind: 'number', cell: ({ density }) => share(density.parts.filter(({ role }) => role === 'blunder').reduce((sum, { weight }) => sum + weight, 0)) },
  ], {
    caption: 'The ellipse holds the well with 95 %, if the record is no blunder. The blunder share is the chance that the record is badly wrong; it is in every chance of this report, but not in the drawn ellipse.',
    none: 'No record has a place.',
  })}
${records.unplaced.length > 0 && table(records.unplaced, [
    { head: 'Record', names: true, cell: ({ recordId, row }) => html`<span class="word">${recordId || `row ${row}`}</span>` },
    { head: 'File and row', cell: ({ source, row }) => `${source}, row ${row}` },
    { head: 'Column', cell: ({ column }) => column },
    { head: 'Value', cell: ({ value }) => html`<q>${value}</q>` },
    { head: 'What is wrong', cell: ({ problem }) => problem },
    { head: 'What to do', cell: ({ advice }) => advice },
  ], { caption: 'Records that could not be placed. They take no part in any result until they are mended.', none: '' })}
${remarks.length > 0 && table(remarks, [
    { head: 'Record', names: true, cell: ({ recordId, row }) => html`<span class="word">${recordId || `row ${row}`}</span>` },
    { head: 'File and row', cell: ({ source, row }) => `${source}, row ${row}` },
    { head: 'Kind', cell: ({ kind }) => kind },
    { head: 'Remark', cell: ({ text }) => text },
  ], { caption: 'Records to look at: statements that disagree, repairs, rows joined, API numbers.', none: '' })}
</section>`;
}

function share(weight: number): string {
  return weight > 0 ? `${number(100 * weight, weight < 0.1 ? 1 : 0)} %` : NONE;
}
