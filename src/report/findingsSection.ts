import type { Finding } from '../findings/types.js';
import { NONE, chanceCell, frameUnit, number } from './format.js';
import { html, type Html } from './html.js';
import { geographicPlace, framePlace, hasPlace } from './places.js';
import { anomalyOf } from './sentences.js';
import { FINDING_WORDS, findingSign } from './symbols.js';
import { table } from './table.js';
import type { ReportContent } from './types.js';

/** Every finding with its chances. */
export function findingsSection({ findings }: ReportContent): Html | null {
  if (!findings) return null;
  return html`
<section id="findings">
<h2>Findings</h2>
${table(findings.list, [
    { head: 'Record', names: true, cell: ({ recordId }) => html`<span class="word">${recordId || NONE}</span>` },
    { head: 'Anomaly', cell: ({ anomalyId }) => anomalyId || NONE },
    { head: 'Finding', cell: ({ finding }) => html`<span class="word">${findingSign(finding)} ${FINDING_WORDS[finding]}</span>` },
    { head: 'Match', kind: 'number', cell: ({ pMatch }) => chanceCell(pMatch) },
    { head: 'Distance, m', kind: 'number', cell: ({ distM }) => number(distM, 1) },
    { head: 'Azimuth, °', kind: 'number', cell: ({ azimDeg }) => number(azimDeg, 0) },
    { head: 'Covered', kind: 'number', cell: ({ pCovered }) => chanceCell(pCovered) },
    { head: 'Detected', kind: 'number', cell: ({ pDetect }) => chanceCell(pDetect) },
    { head: 'Remains', kind: 'number', cell: ({ pRemains }) => chanceCell(pRemains) },
    { head: 'Dig', kind: 'number', cell: ({ digOrder }) => (digOrder > 0 ? digOrder : NONE) },
  ], { caption: 'One row for each record with a place, and one for each casing that no record tells of.', none: 'No findings.' })}
<dl class="meaning">
<div><dt>Match</dt><dd>record and anomaly are the same well; for a casing on no record, that none of the records is it</dd></div>
<div><dt>Distance, azimuth</dt><dd>from the recorded place to the casing, clockwise from grid north</dd></div>
<div><dt>Covered</dt><dd>the well lies in ground that was searched</dd></div>
<div><dt>Detected</dt><dd>it lies there, and a casing as stated would have been detected: never above covered</dd></div>
<div><dt>Remains</dt><dd>a casing as stated is still there, wherever the well may lie, given what the search found</dd></div>
</dl>
</section>`;
}

/** Where to dig, in order, with positions that a receiver or a surveyor can take. */
export function digSection(content: ReportContent): Html | null {
  const { findings, site } = content;
  if (!findings) return null;
  const list = findings.list.filter((finding) => finding.digOrder > 0 && hasPlace(finding)).toSorted((a, b) => a.digOrder - b.digOrder);
  const { symbol } = frameUnit(site.frame);
  const regionOf = (finding: Finding): { semiMajM: number; semiMinM: number; azimDeg: number } | undefined =>
    anomalyOf(finding, content) ?? content.records?.placed.find(({ recordId }) => recordId === finding.recordId);
  return html`
<section id="dig">
<h2>Where to dig</h2>
<p>In this order. Read the <a href="#cautions">cautions</a> first. Coordinates: ${site.frame.name} (${site.frame.code}), and WGS 84 in degrees.</p>
${table(list, [
    { head: 'Dig', names: true, kind: 'number', cell: ({ digOrder }) => digOrder },
    { head: 'Casing', cell: ({ anomalyId, recordId }) => html`${anomalyId || recordId}${anomalyId && recordId ? html`<br><small class="word">record ${recordId}</small>` : ''}` },
    { head: `Easting, ${symbol}`, kind: 'number', cell: ({ x, y }) => framePlace(site, x, y).east },
    { head: `Northing, ${symbol}`, kind: 'number', cell: ({ x, y }) => framePlace(site, x, y).north },
    { head: 'Latitude, °', kind: 'number', cell: ({ x, y }) => geographicPlace(site, x, y).lat },
    { head: 'Longitude, °', kind: 'number', cell: ({ x, y }) => geographicPlace(site, x, y).lon },
    { head: '95 % half-axes, m', kind: 'number', cell: (finding) => { const region = regionOf(finding); return region ? `${number(region.semiMajM, 2)} × ${number(region.semiMinM, 2)}` : NONE; } },
    { head: 'Azimuth, °', kind: 'number', cell: (finding) => number(regionOf(finding)?.azimDeg ?? NaN, 0) },
    { head: 'Depth, m', kind: 'number', cell: (finding) => depth(finding, content) },
  ], {
    caption: 'The ellipse of the half-axes holds the casing with 95 %; its azimuth is that of the longer axis, clockwise from grid north. Depth of the casing’s top below ground, plus or minus 1.96 standard deviations.',
    none: 'Nothing to dig for.',
  })}
</section>`;
}

function depth(finding: Finding, content: ReportContent): string {
  const anomaly = anomalyOf(finding, content);
  if (!anomaly || !Number.isFinite(anomaly.depthM)) return NONE;
  return Number.isFinite(anomaly.depthSdM) ? `${number(anomaly.depthM, 1)} ± ${number(1.96 * anomaly.depthSdM, 1)}` : number(anomaly.depthM, 1);
}
