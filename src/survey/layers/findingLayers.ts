import type { Findings } from '../../findings/types.js';
import type { Site } from '../../site/types.js';
import type { Field, Layer } from '../../vector/types.js';
import { known } from './known.js';

const CHANCE_DECIMALS = 4;

const FIELDS: readonly Field[] = [
  { name: 'record_id', type: 'text', title: 'Record, empty for an unrecorded casing' },
  { name: 'anomaly_id', type: 'text', title: 'Anomaly, empty where none belongs to the record' },
  { name: 'finding', type: 'text', title: 'located, ambiguous, not_found, not_searched or unrecorded' },
  { name: 'p_match', type: 'real', title: 'Chance that record and anomaly are one well; unrecorded: that no record tells of it', decimals: CHANCE_DECIMALS },
  { name: 'dist_m', type: 'real', title: 'From the record to the casing, m', decimals: 2 },
  { name: 'azim_deg', type: 'real', title: 'From the record to the casing, degrees clockwise from grid north', decimals: 1 },
  { name: 'p_covered', type: 'real', title: 'Chance that the well lies in ground searched', decimals: CHANCE_DECIMALS },
  { name: 'p_detect', type: 'real', title: 'Chance that it lies there and would have been detected', decimals: CHANCE_DECIMALS },
  { name: 'p_remains', type: 'real', title: 'Chance that a casing as stated is still there, given the search', decimals: CHANCE_DECIMALS },
  { name: 'dig_order', type: 'integer', title: 'Order of digging, from 1; 0 where there is nothing to dig' },
  { name: 'note', type: 'text', title: 'What else has to be known' },
];

/** One row per record and one per unrecorded casing; a record without a place has a row without geometry. */
export function findingLayers({ list }: Findings, site: Site): Layer[] {
  return [{
    name: 'findings', title: 'Findings', crs: site.frame, geometryType: 'Point', fields: FIELDS,
    features: list.map((finding) => ({
      geometry: Number.isFinite(finding.x) ? { type: 'Point', coordinates: [finding.x, finding.y] } : null,
      values: {
        record_id: finding.recordId, anomaly_id: finding.anomalyId, finding: finding.finding, p_match: known(finding.pMatch), dist_m: known(finding.distM),
        azim_deg: known(finding.azimDeg), p_covered: known(finding.pCovered), p_detect: known(finding.pDetect), p_remains: known(finding.pRemains),
        dig_order: finding.digOrder, note: finding.note,
      },
    })),
  }];
}
