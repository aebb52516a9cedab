import type { AnomalyClass } from '../anomalies/types.js';
import { colourAt, hexColour, type Ramp } from '../raster/colourRamps.js';
import { rampPlace, type ColourRange } from '../raster/colourRange.js';
import { FOOT_M } from '../units.js';
import { capital, number } from './format.js';
import { html, type Html } from './html.js';
import { roundStep, type MapFrame } from './mapFrame.js';
import { CLASS_WORDS, anomalyMark, recordMark, round } from './symbols.js';
import type { ReportContent } from './types.js';

export interface ColourKey {
  readonly title: string;
  readonly ramp: Ramp;
  readonly range: ColourRange;
  readonly values: readonly number[];
  label(value: number): string;
}

export const LEGEND_WIDTH = 196;
const BAR_HEIGHT = 190;
/** A number of stops whose places are short decimals. */
const BAR_STOPS = 33;

/** The right-hand column of a map: colours, signs, scale and norths; with the y at which it ends. */
export function mapLegend(content: ReportContent, frame: MapFrame, key: ColourKey | null, left: number): { drawing: Html; bottom: number } {
  let top = frame.top + 4;
  const parts: Html[] = [];
  const add = (part: Html, height: number): void => {
    parts.push(html`<g transform="translate(${round(left)} ${round(top)})">${part}</g>`);
    top += height;
  };
  if (key) add(colourBar(key), BAR_HEIGHT + 46);
  const signs = signList(content);
  add(html`${signs.map((sign, i) => html`<g transform="translate(0 ${i * 21 + 10})"><g transform="translate(11 0)">${sign.mark}</g><text class="key" x="30" y="4">${sign.text}</text></g>`)}`, signs.length * 21 + 18);
  add(scaleBars(frame, content), content.site.frame.unit === 'metre' ? 44 : 72);
  add(norths(content), 118);
  return { drawing: html`${parts}`, bottom: top };
}

function colourBar({ title, ramp, range, values, label }: ColourKey): Html {
  return html`
<defs><linearGradient id="${ramp.name}-ramp" x1="0" y1="0" x2="0" y2="1">${Array.from({ length: BAR_STOPS }, (_, i) => html`<stop offset="${i / (BAR_STOPS - 1)}" stop-color="${hexColour(colourAt(ramp, 1 - i / (BAR_STOPS - 1)))}"/>`)}</linearGradient></defs>
<text class="key strong" x="0" y="8">${title}</text>
<g transform="translate(0 20)">
<rect class="bar" x="0" y="0" width="20" height="${BAR_HEIGHT}" fill="url(#${ramp.name}-ramp)"/>
${values.map((value) => {
    const y = round((1 - rampPlace(range, value)) * BAR_HEIGHT);
    return html`<path class="tick" d="M20 ${y}H25"/><text class="key" x="30" y="${round(y + 3.8)}">${label(value)}</text>`;
  })}
</g>`;
}

function signList({ site, records, readings, anomalies }: ReportContent): Array<{ mark: Html; text: string }> {
  const classes = (['casing', 'linear', 'compact', 'unresolved'] as const satisfies readonly AnomalyClass[]).filter((kind) => anomalies?.list.some((anomaly) => anomaly.class === kind));
  return [
    ...classes.map((kind) => ({ mark: anomalyMark(kind, 60), text: capital(CLASS_WORDS[kind]) })),
    ...(anomalies?.list.some(({ outline }) => outline.length > 0) ? [{ mark: html`<path class="outline" d="M-9 0C-9-8 9-8 9 0C9 8-9 8-9 0Z"/>`, text: 'Its outline above noise' }] : []),
    ...(records && records.placed.length > 0 ? [
      { mark: recordMark(), text: 'Record, best place' },
      { mark: html`<ellipse class="ellipse" rx="10" ry="6"/>`, text: 'Record, 95 % ellipse' },
    ] : []),
    ...(readings ? [{ mark: html`<path class="walked" d="M-10 3C-4-3 4 4 10-2"/>`, text: 'Lines as walked' }] : []),
    { mark: html`<path class="parcel" d="M-9-6H9V6H-9Z"/>`, text: 'Parcel' },
    ...(site.exclusions.length > 0 ? [{ mark: html`<path class="exclusion" d="M-9-6H9V6H-9Z"/><path class="hatch" d="M-9 2L-1-6M-6 6L6-6M2 6L9-1"/>`, text: 'Not to be walked' }] : []),
  ];
}

/** A bar in metres and, where the survey is in feet, one in feet. */
function scaleBars(frame: MapFrame, { site }: ReportContent): Html {
  const longest = 130 / frame.scale;
  const bar = (step: number, metres: number, symbol: string, y: number): Html => {
    const half = round((step * metres * frame.scale) / 2);
    return html`<g transform="translate(0 ${y})"><rect class="scale full" x="0" y="0" width="${half}" height="5"/><rect class="scale" x="${half}" y="0" width="${half}" height="5"/><text class="key" x="0" y="17">0</text><text class="key middle" x="${round(2 * half)}" y="17">${number(step)} ${symbol}</text></g>`;
  };
  const inMetres = bar(roundStep(longest), 1, 'm', 4);
  return site.frame.unit === 'metre' ? inMetres : html`${inMetres}${bar(roundStep(longest / FOOT_M), FOOT_M, 'ft', 32)}`;
}

/** Grid, true and magnetic north, as seen on a map whose upper edge is grid north. */
function norths({ site }: ReportContent): Html {
  const { declinationDeg, convergenceDeg } = site.mainField;
  const trueDeg = -convergenceDeg;
  const magneticDeg = declinationDeg - convergenceDeg;
  return html`
<g transform="translate(34 100)">
${arrow(magneticDeg, html`<path class="north" d="M0-64L0-46M0-64L${magneticDeg > 0 ? 4.5 : -4.5}-54"/>`, { shaft: 64, letter: 'M' })}
${arrow(trueDeg, html`<path class="north star" d="M0-94L1.8-88.4L7.6-88.4L2.9-85L4.7-79.4L0-82.8L-4.7-79.4L-2.9-85L-7.6-88.4L-1.8-88.4Z"/>`, { shaft: 82, letter: '' })}
<path class="north strong" d="M0 0V-66"/><path class="mark" d="M0-72L4.5-60H-4.5Z"/>
</g>
<text class="key" x="68" y="32">Up: grid north</text>
<text class="key" x="68" y="50">★ true ${degrees(trueDeg)}</text>
<text class="key" x="68" y="68">M magnetic ${degrees(magneticDeg)}</text>
<text class="key faint" x="68" y="86">of grid north</text>`;
}

function degrees(angle: number): string {
  return `${number(Math.abs(angle), 1)}°${Math.abs(angle) < 0.05 ? '' : angle > 0 ? ' E' : ' W'}`;
}

/** An arrow turned clockwise by an angle; its letter stands beside the tip, on the side that it leans to. */
function arrow(angle: number, head: Html, { shaft, letter }: { shaft: number; letter: string }): Html {
  const side = angle > 0 ? 9 : -9;
  return html`<g transform="rotate(${round(angle)})"><path class="north" d="M0 0V${-shaft}"/>${head}${letter && html`<text class="key middle strong" transform="translate(${side} ${-shaft + 4}) rotate(${round(-angle)})">${letter}</text>`}</g>`;
}
