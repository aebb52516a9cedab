import { ellipseRing } from '../density/ellipse.js';
import type { Area, Ellipse } from '../density/types.js';
import { frameUnit, number } from './format.js';
import { html, type Html } from './html.js';
import { mapTicks, type MapFrame } from './mapFrame.js';
import type { GridPicture } from './gridPicture.js';
import { placeLabels, type Label } from './placeLabels.js';
import { anomalyMark, recordMark, round } from './symbols.js';
import type { ReportContent } from './types.js';
import { walkedPath } from './walkedLines.js';

/** Corners of a drawn ellipse. */
const CORNERS = 60;

/** The layers of a map from the ground up, clipped to the map, with its frame and ticks on top. */
export function mapLayers(content: ReportContent, frame: MapFrame, picture: GridPicture | null, id: string): Html {
  const { site, records, readings, anomalies } = content;
  const drawn = records?.placed.filter(({ x, y }) => frame.holds(x, y)) ?? [];
  return html`
<defs>
<clipPath id="${id}-clip"><rect x="${frame.left}" y="${frame.top}" width="${round(frame.width)}" height="${round(frame.height)}"/></clipPath>
<pattern id="${id}-hatch" width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="hatch" d="M0 0V7"/></pattern>
</defs>
<rect class="ground" x="${frame.left}" y="${frame.top}" width="${round(frame.width)}" height="${round(frame.height)}"/>
<g clip-path="url(#${id}-clip)">
${picture && html`<image x="${round(frame.x(picture.west))}" y="${round(frame.y(picture.north))}" width="${round(picture.widthM * frame.scale)}" height="${round(picture.heightM * frame.scale)}" preserveAspectRatio="none" href="${picture.dataUrl}"/>`}
${graticule(content, frame)}
${site.exclusions.length > 0 && html`<path class="exclusion" fill="url(#${id}-hatch)" d="${areaPath(site.exclusions, frame)}"/>`}
${readings && html`<path class="walked" d="${walkedPath(readings, frame)}"/>`}
<path class="parcel" d="${areaPath(site.parcel, frame)}"/>
${anomalies?.list.map(({ outline }) => outline.length > 0 && html`<path class="outline" d="${areaPath(outline, frame)}"/>`)}
${records?.placed.map((record) => html`<path class="ellipse-halo" d="${ellipsePath(record, frame)}"/><path class="ellipse" d="${ellipsePath(record, frame)}"/>`)}
${drawn.map(({ x, y }) => html`<g transform="translate(${round(frame.x(x))} ${round(frame.y(y))})">${recordMark()}</g>`)}
${anomalies?.list.map((anomaly) => frame.holds(anomaly.x, anomaly.y) && html`<g transform="translate(${round(frame.x(anomaly.x))} ${round(frame.y(anomaly.y))})">${anomalyMark(anomaly.class, anomaly.strikeDeg)}</g>`)}
${labels(content, frame)}
</g>
<rect class="neat" x="${frame.left}" y="${frame.top}" width="${round(frame.width)}" height="${round(frame.height)}"/>
${tickLabels(content, frame)}`;
}

export function areaPath(area: Area, frame: MapFrame): string {
  return area.flatMap((rings) => rings.map((ring) => `M${ring.map(([x, y]) => `${round(frame.x(x))} ${round(frame.y(y))}`).join('L')}Z`)).join('');
}

function ellipsePath(ellipse: Ellipse, frame: MapFrame): string {
  return areaPath([[ellipseRing(ellipse, CORNERS)]], frame);
}

function labels(content: ReportContent, frame: MapFrame): Html[] {
  const order = new Map(content.findings?.list.filter(({ anomalyId, digOrder }) => anomalyId && digOrder > 0).map(({ anomalyId, digOrder }) => [anomalyId, digOrder]));
  const wanted: Label[] = [
    ...(content.anomalies?.list ?? []).map((anomaly) => {
      const dig = order.get(anomaly.anomalyId);
      return { x: anomaly.x, y: anomaly.y, text: dig ? `${anomaly.anomalyId} · dig ${dig}` : anomaly.anomalyId, className: dig ? 'label dig' : 'label' };
    }),
    ...(content.records?.placed ?? []).map(({ x, y, recordId }) => ({ x, y, text: recordId, className: 'label record' })),
  ].filter(({ x, y }) => frame.holds(x, y)).map((label) => ({ ...label, x: frame.x(label.x), y: frame.y(label.y) }));
  const bounds = { left: frame.left + 3, top: frame.top + 3, right: frame.left + frame.width - 3, bottom: frame.top + frame.height - 3 };
  return placeLabels(wanted, bounds).map((label) => html`${label.far && html`<path class="leader" d="M${round(label.x)} ${round(label.y)}L${round(label.left < label.x ? label.left + 6.6 * label.text.length : label.left)} ${round(label.baseline - 4)}"/>`}<text class="${label.className}" x="${round(label.left)}" y="${round(label.baseline)}">${label.text}</text>`);
}

function graticule(content: ReportContent, frame: MapFrame): Html {
  const { east, north } = mapTicks(frame, content);
  const path = [
    ...east.map(({ at }) => `M${round(frame.x(at))} ${frame.top}V${round(frame.top + frame.height)}`),
    ...north.map(({ at }) => `M${frame.left} ${round(frame.y(at))}H${round(frame.left + frame.width)}`),
  ].join('');
  return html`<path class="graticule" d="${path}"/>`;
}

function tickLabels(content: ReportContent, frame: MapFrame): Html {
  const { east, north } = mapTicks(frame, content);
  const { symbol } = frameUnit(content.site.frame);
  return html`
<path class="tick" d="${east.map(({ at }) => `M${round(frame.x(at))} ${frame.top - 5}V${frame.top}`).join('')}${north.map(({ at }) => `M${frame.left - 5} ${round(frame.y(at))}H${frame.left}`).join('')}"/>
${east.map(({ at, value }) => html`<text class="axis middle" x="${round(frame.x(at))}" y="${frame.top - 9}">${number(value)}</text>`)}
${north.map(({ at, value }) => html`<text class="axis end" x="${frame.left - 8}" y="${round(frame.y(at) + 3.5)}">${number(value)}</text>`)}
<text class="axis end" x="${frame.left - 8}" y="${round(frame.top + frame.height + 15)}">${symbol}</text>`;
}
