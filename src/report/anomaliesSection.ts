import type { Anomaly } from '../anomalies/types.js';
import { NBSP, NONE, chanceCell, number } from './format.js';
import { html, type Html } from './html.js';
import { framePlace } from './places.js';
import { CLASS_WORDS, anomalyMark } from './symbols.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

/** Every source that the readings tell of. */
export function anomaliesSection({ anomalies, site }: ReportContent): Html | null {
  if (!anomalies) return null;
  const { symbol } = framePlace(site, 0, 0);
  const { noise } = anomalies;
  return html`
<section id="anomalies">
<h2>Anomalies</h2>
${table(anomalies.list, [
    { head: 'Anomaly', names: true, cell: ({ anomalyId }) => anomalyId },
    { head: 'Class', cell: (anomaly) => html`<span class="word"><svg class="sign" viewBox="-9 -9 18 18" aria-hidden="true">${anomalyMark(anomaly.class, anomaly.strikeDeg)}</svg> ${CLASS_WORDS[anomaly.class]}</span>${anomaly.note ? html`<br><small>${anomaly.note}</small>` : ''}` },
    { head: 'Casing', kind: 'number', cell: ({ pCasing }) => chanceCell(pCasing) },
    { head: 'Peak, nT', kind: 'number', cell: ({ peakNT }) => number(peakNT, Math.abs(peakNT) < 100 ? 1 : 0) },
    { head: 'd', kind: 'number', cell: ({ snr }) => number(snr, snr < 100 ? 1 : 0) },
    { head: 'Depth, m', kind: 'number', cell: ({ depthM, depthSdM }) => (Number.isFinite(depthM) ? html`${number(depthM, 1)}<br><small>sd ${number(depthSdM, 2)}</small>` : NONE) },
    { head: 'Strength', kind: 'number', cell: strength },
    { head: `Place, ${symbol}`, kind: 'number', cell: ({ x, y }) => { const place = framePlace(site, x, y); return html`E ${place.east}<br>N ${place.north}`; } },
    { head: '95 % half-axes, m', kind: 'number', cell: ({ semiMajM, semiMinM }) => `${number(semiMajM, 2)} × ${number(semiMinM, 2)}` },
    { head: 'Outline, m²', kind: 'number', cell: ({ areaM2 }) => number(areaM2) },
  ], {
    caption: 'd is the deflection: how many times the noise the fitted source rises in the readings near it. Strength is positive where the casing’s top attracts a compass’s north end. Depth below ground; strike clockwise from grid north.',
    none: 'The readings tell of no source above the noise.',
  })}
<p>Noise of the residual: ${number(noise.whiteSdNT, 2)} nT from reading to reading, and ${number(noise.correlatedSdNT, 2)} nT that varies over about ${number(noise.correlationM, 0)}${NBSP}m (soil, geology, passing disturbances). Both, and the error of the recorded positions, are in every chance and every ellipse.</p>
${anomalies.notes.length > 0 && html`<ul class="notes">${anomalies.notes.map((note) => html`<li>${note}</li>`)}</ul>`}
</section>`;
}

/** Of a pole, a dipole or a line, whichever the source is. */
function strength({ poleAM, poleSdAM, momentAM2, strikeDeg }: Anomaly): Html | string {
  if (Number.isFinite(poleAM)) return html`${number(poleAM, 0)} A·m<br><small>sd ${number(poleSdAM, 0)}</small>`;
  if (Number.isFinite(momentAM2)) return `${number(momentAM2, momentAM2 < 10 ? 1 : 0)} A·m²`;
  return Number.isFinite(strikeDeg) ? html`<small>strike ${number(strikeDeg)}°</small>` : NONE;
}
