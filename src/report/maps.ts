import { CHANCE_RAMP, RESIDUAL_RAMP } from '../raster/colourRamps.js';
import type { Grid } from '../raster/types.js';
import { NBSP, number } from './format.js';
import { gridPicture, type GridPicture } from './gridPicture.js';
import { html, type Html } from './html.js';
import { mapLayers } from './mapDrawing.js';
import { mapFrame } from './mapFrame.js';
import { LEGEND_WIDTH, mapLegend, type ColourKey } from './mapLegend.js';
import { legendValues, residualRange } from './residualRange.js';
import { round } from './symbols.js';
import type { ReportContent, ReportOptions } from './types.js';

/** Between a map and its legend. */
const GAP = 26;
/** Below a map. */
const FOOT = 24;

/** Residual field with all that was walked, recorded and found. */
export function residualMap(content: ReportContent, { pictureCells }: ReportOptions): Html {
  const grid = content.residual;
  const range = grid ? residualRange(grid, content.anomalies?.noise) : null;
  const key: ColourKey | null = range && {
    title: 'Residual field, nT', ramp: RESIDUAL_RAMP, range, values: legendValues(range),
    label: (value) => (value > 0 ? `+${number(value, decimalsOf(value))}` : number(value, decimalsOf(value))),
  };
  const picture = grid && range ? gridPicture(grid, { ramp: RESIDUAL_RAMP, range, mostCells: pictureCells }) : null;
  return figure(content, {
    id: 'residual', picture, key, title: 'Map of the residual field',
    caption: html`Residual magnetic field, records, and anomalies. ${range && html`Colours go evenly through the noise (to about ±${number(range.knee!, 1)}${NBSP}nT) and by logarithm above it. `}${cells(grid, picture)}`,
  });
}

/** How surely the stated casing would have been heard, place by place. */
export function detectionMap(content: ReportContent, { pictureCells }: ReportOptions): Html | null {
  const grid = content.detection;
  if (!grid) return null;
  const key: ColourKey = {
    title: 'Chance of detection', ramp: CHANCE_RAMP, range: { low: 0, high: 1 }, values: [0, 0.2, 0.4, 0.6, 0.8, 1],
    label: (value) => `${Math.round(100 * value)} %`,
  };
  const picture = gridPicture(grid, { ramp: CHANCE_RAMP, range: key.range, mostCells: pictureCells });
  const { anomalies: _, ...rest } = content;
  return figure(rest, {
    id: 'detection', picture, key, title: 'Map of the chance of detection',
    caption: html`Chance that a casing as stated would have been detected, were it at that place, from the lines as they were walked. ${cells(grid, picture)}`,
  });
}

function figure(content: ReportContent, { id, picture, key, title, caption }: { id: string; picture: GridPicture | null; key: ColourKey | null; title: string; caption: Html }): Html {
  const frame = mapFrame(content);
  const width = Math.round(frame.left + frame.width + GAP + LEGEND_WIDTH);
  const legend = mapLegend(content, frame, key, frame.left + frame.width + GAP);
  const height = Math.round(Math.max(frame.top + frame.height + FOOT, legend.bottom));
  return html`
<figure class="map">
<div class="scroll"><svg viewBox="0 0 ${width} ${height}" role="img" aria-labelledby="${id}-title ${id}-caption"><title id="${id}-title">${title}</title>
${mapLayers(content, frame, picture, id)}
${legend.drawing}
</svg></div>
<figcaption id="${id}-caption">${caption}</figcaption>
</figure>`;
}

function cells(grid: Grid | undefined, picture: GridPicture | null): string {
  if (!grid || !picture) return 'No grid was made.';
  const side = Math.round(grid.width / picture.columns);
  const shown = side === 1 ? '' : `, shown by means over ${side} × ${side} of them`;
  return `Cells of ${number(grid.cellM, decimalsOf(grid.cellM))}${NBSP}m${shown}.`;
}

function decimalsOf(value: number): number {
  const rest = Math.abs(round(value) - Math.round(value));
  return Math.abs(value) < 1 && value !== 0 ? 1 : rest > 0 ? 1 : 0;
}
