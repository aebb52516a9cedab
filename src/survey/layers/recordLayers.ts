import { ELLIPSE_MASS, ellipseRing } from '../../density/ellipse.js';
import { region95 } from '../../density/region95.js';
import type { WellRecord, Records } from '../../records/types.js';
import type { Site } from '../../site/types.js';
import type { Field, FieldValue, Layer } from '../../vector/types.js';

/** Corners of a drawn ellipse: a chord stays within 0.1 % of the axis. */
const ELLIPSE_CORNERS = 72;

const FIELDS: readonly Field[] = [
  { name: 'record_id', type: 'text', title: 'Identifier of the record' },
  { name: 'datum', type: 'text', title: 'Datum the record stands in' },
  { name: 'shift', type: 'text', title: 'How it was moved to the datum of the survey' },
  { name: 'pos_sd_m', type: 'real', title: 'Standard deviation of the position per axis, m (rms of both)', decimals: 2 },
  { name: 'semi_maj_m', type: 'real', title: 'Half major axis of the 95 % ellipse, blunders left out, m', decimals: 2 },
  { name: 'semi_min_m', type: 'real', title: 'Half minor axis of the 95 % ellipse, blunders left out, m', decimals: 2 },
  { name: 'azim_deg', type: 'real', title: 'Azimuth of the major axis, degrees clockwise from grid north', decimals: 1 },
  { name: 'ell_holds', type: 'real', title: 'Share of the position, blunders left out, that the drawn ellipse holds: it encloses the 95 % region', decimals: 3 },
  { name: 'basis', type: 'text', title: 'What the position rests on' },
  { name: 'note', type: 'text', title: 'What else has to be known' },
];

/** Positions of the records, their 95 % ellipses, and the 95 % areas of those that rest on an area (a section, a part of it). */
export function recordLayers({ placed }: Records, site: Site): Layer[] {
  const onAreas = placed.filter(({ density }) => density.parts.some(({ kind, role }) => kind === 'area' && role === 'place'));
  const areas: Layer = {
    name: 'records_areas', title: 'Records that rest on an area: 95 % areas', crs: site.frame, geometryType: 'MultiPolygon', fields: FIELDS,
    features: onAreas.map((record) => ({
      geometry: { type: 'MultiPolygon', coordinates: region95(record.density).outline().map((rings) => rings.map((ring) => ring.map(([x, y]) => [x, y]))) },
      values: values(record),
    })),
  };
  return [
    {
      name: 'records', title: 'Records: best positions', crs: site.frame, geometryType: 'Point', fields: FIELDS,
      features: placed.map((record) => ({ geometry: { type: 'Point', coordinates: [record.x, record.y] }, values: values(record) })),
    },
    {
      name: 'records_ellipses', title: 'Records: 95 % ellipses', crs: site.frame, geometryType: 'Polygon', fields: FIELDS,
      features: placed.map((record) => ({ geometry: { type: 'Polygon', coordinates: [ellipseRing(record, ELLIPSE_CORNERS)] }, values: values(record) })),
    },
    ...(onAreas.length > 0 ? [areas] : []),
  ];
}

function values(record: WellRecord): Record<string, FieldValue> {
  return {
    record_id: record.recordId, datum: record.datum, shift: record.shift, pos_sd_m: record.posSdM,
    semi_maj_m: record.semiMajM, semi_min_m: record.semiMinM, azim_deg: record.azimDeg, ell_holds: record.excess?.massHeld ?? ELLIPSE_MASS, basis: record.basis, note: record.note,
  };
}
