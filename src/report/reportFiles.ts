import type { ReportContent, ReportFile } from './types.js';

const BOTH = 'GeoJSON (WGS 84) and FlatGeobuf (survey’s CRS)';

type Told = keyof Pick<ReportContent, 'records' | 'plan' | 'readings' | 'residual' | 'detection' | 'anomalies' | 'findings'>;

/** Files that every delivery writes for what the report tells of, by the part that they hold. */
const FILES: ReadonlyArray<ReportFile & { readonly part: Told }> = [
  { part: 'findings', name: 'findings.geojson, findings.fgb', format: BOTH, title: 'One row per record, and one per casing that no record tells of' },
  { part: 'anomalies', name: 'anomalies.geojson, anomalies.fgb', format: BOTH, title: 'Sources as points' },
  { part: 'anomalies', name: 'anomalies_outlines.geojson, anomalies_outlines.fgb', format: BOTH, title: 'Outlines of the anomalies' },
  { part: 'records', name: 'records.geojson, records.fgb', format: BOTH, title: 'Best places of the records' },
  { part: 'records', name: 'records_ellipses.geojson, records_ellipses.fgb', format: BOTH, title: '95 % ellipses of the records' },
  { part: 'records', name: 'records_log.csv, records_remarks.csv', format: 'CSV', title: 'How each row became a place; what to look at' },
  { part: 'plan', name: 'plan.geojson, plan.fgb', format: BOTH, title: 'Lines in walking order' },
  { part: 'plan', name: 'search_area.geojson, search_area.fgb', format: BOTH, title: 'Ground to be searched' },
  { part: 'plan', name: 'plan.gpx', format: 'GPX 1.1', title: 'Lines for a receiver' },
  { part: 'residual', name: 'residual.tif, residual.sld', format: 'Cloud-Optimised GeoTIFF, and its style (SLD 1.0)', title: 'Residual field, nT' },
  { part: 'detection', name: 'detection.tif, detection.sld', format: 'Cloud-Optimised GeoTIFF, and its style (SLD 1.0)', title: 'Chance of detection, 0 to 1' },
  { part: 'readings', name: 'readings.csv', format: 'CSV', title: 'Reduced readings, a column for each step' },
];

const ALWAYS: readonly ReportFile[] = [
  { name: 'item.json', format: 'STAC Item', title: 'List of all files, with place and time' },
  { name: 'provenance.json', format: 'JSON', title: 'What was put in, with hashes, parameters and versions' },
];

export function reportFiles(content: ReportContent): ReportFile[] {
  return [...FILES.filter(({ part }) => content[part] !== undefined).map(({ name, format, title }) => ({ name, format, title })), ...ALWAYS];
}
