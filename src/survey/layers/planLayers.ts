import type { SurveyPlan } from '../../plan/types.js';
import type { Site } from '../../site/types.js';
import type { Layer } from '../../vector/types.js';

/** The ground to be searched, and the lines in walking order. */
export function planLayers(plan: SurveyPlan, site: Site): Layer[] {
  return [
    {
      name: 'search_area', title: 'Ground to be searched', crs: site.frame, geometryType: 'Polygon',
      fields: [{ name: 'part', type: 'integer', title: 'Number of the part' }],
      features: plan.searchArea.map((rings, i) => ({
        geometry: { type: 'Polygon', coordinates: rings.map((ring) => ring.map(([x, y]) => [x, y])) }, values: { part: i + 1 },
      })),
    },
    {
      name: 'plan', title: 'Lines in walking order', crs: site.frame, geometryType: 'LineString',
      fields: [
        { name: 'line_no', type: 'integer', title: 'Number of the line' },
        { name: 'kind', type: 'text', title: 'survey or tie' },
        { name: 'visit', type: 'integer', title: 'Order of walking, from 1' },
        { name: 'sortie', type: 'integer', title: 'Outing that the line belongs to, from 1' },
        { name: 'length_m', type: 'real', title: 'Length, m', decimals: 2 },
        { name: 'azim_deg', type: 'real', title: 'Direction of walking, degrees clockwise from grid north', decimals: 2 },
      ],
      features: plan.lines.toSorted((a, b) => a.visit - b.visit).map((line) => ({
        geometry: { type: 'LineString', coordinates: [[line.x0, line.y0], [line.x1, line.y1]] },
        values: { line_no: line.lineNo, kind: line.kind, visit: line.visit, sortie: line.sortie, length_m: line.lengthM, azim_deg: line.azimDeg },
      })),
    },
  ];
}
