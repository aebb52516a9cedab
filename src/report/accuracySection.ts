import { areaMoments } from '../density/area.js';
import type { Datum, ShiftedPlace } from '../geodesy/types.js';
import { NONE, listed, number } from './format.js';
import { html, type Html } from './html.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

interface ShiftRow extends ShiftedPlace {
  readonly what: string;
  readonly from: string;
  readonly to: string;
}

/** How far positions and chances can be trusted. */
export function accuracySection(content: ReportContent): Html {
  const { site, readings } = content;
  const { totalNT, inclinationDeg, declinationDeg, convergenceDeg } = site.mainField;
  return html`
<section id="accuracy">
<h2>How accurate this is</h2>
${table(shiftRows(content), [
    { head: 'What', names: true, cell: ({ what }) => what },
    { head: 'From', cell: ({ from }) => from },
    { head: 'To', cell: ({ to }) => to },
    { head: 'By', cell: ({ shift }) => shift },
    { head: 'Error, m', kind: 'number', cell: ({ sdM }) => (sdM > 0 ? number(sdM, 2) : NONE) },
    { head: 'Shared error, m', kind: 'number', cell: ({ sharedSdM }) => (sharedSdM > 0 ? number(sharedSdM, 2) : NONE) },
  ], {
    caption: 'How positions were moved from one datum to another, at the middle of the parcel. Errors are one standard deviation on each axis; a shared error moves all places the same way.',
    none: 'No position was moved.',
  })}
<ul>
<li>A place on this survey’s map is as good as its receiver. ${readings ? `Recorded positions are taken to be off by ${number(readings.positionSdM, 2)} m on each axis (one standard deviation), wandering over about ${number(readings.positionCorrelationS)} s: so it was stated, and it is in every ellipse.` : ''} A second receiver that is to find a casing again adds its own error.</li>
<li>NAD83 and WGS 84 lie 1.2 to 1.6 m apart in the lower 48 states. Set the receiver to the coordinates that are used: ${site.frame.name} with its own datum (${site.frame.datum}), or latitude and longitude in WGS 84.</li>
<li>An ellipse holds the place with 95 %. A record’s ellipse leaves out its blunder share; a chance does not.</li>
<li>Chances rest on the casing that was stated to be looked for. A weaker or deeper one is detected less surely than this report says.</li>
<li>Distances, areas and azimuths are those of the map grid.</li>
<li>Main field at the middle of the parcel on the day of the work: ${number(totalNT)} nT, inclination ${number(inclinationDeg, 1)}°, declination ${number(declinationDeg, 1)}° (east positive); grid north lies ${number(Math.abs(convergenceDeg), 2)}° ${convergenceDeg < 0 ? 'west' : 'east'} of true north.</li>
</ul>
</section>`;
}

function shiftRows({ site, records, readings }: ReportContent): ShiftRow[] {
  const { x, y } = areaMoments(site.parcel);
  const [lonDeg, latDeg] = site.frame.inverse(x, y);
  const frame = site.frame.datum;
  const rows: ShiftRow[] = [];
  const datums = [...new Set((records?.placed ?? []).map(({ datum }) => datum))].filter((datum): datum is Datum => datum !== 'unknown').toSorted();
  for (const datum of datums) {
    const ids = records!.placed.filter((record) => record.datum === datum).map(({ recordId }) => recordId);
    const named = ids.length > 6 ? `${ids.length} records` : `record${ids.length === 1 ? '' : 's'} ${listed(ids)}`;
    rows.push({ what: named, from: datum, to: frame, ...site.shiftFrom(datum).place(lonDeg, latDeg) });
  }
  if (readings) rows.push({ what: 'readings in degrees', from: 'WGS 84', to: frame, ...site.shiftFrom('WGS 84').place(lonDeg, latDeg) });
  rows.push({ what: 'latitude and longitude in this report', from: frame, to: 'WGS 84', ...site.toWgs84.place(lonDeg, latDeg) });
  return rows;
}
