import type { Anomalies } from '../anomalies/types.js';
import { UserError } from '../errors.js';
import { RECONCILE_DEFAULTS, reconcile as matchRecords, type ReconcileOptions } from '../findings/reconcile.js';
import type { Grid } from '../raster/types.js';
import type { Records } from '../records/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema } from './schema.js';
import type { Operation, Schema } from './types.js';

const chance = (fallback: number, description: string): Schema => ({ type: 'number', minimum: 0, maximum: 1, default: fallback, description });

const NO_RECORDS: Records = { placed: [], unplaced: [] };

/** Records and anomalies to findings. */
export const reconcile: Operation = {
  id: 'reconcile',
  version: '1.0.0',
  title: 'Records against anomalies',
  summary: 'Says which record is which casing and with what chance, what was searched for and not found and how likely it is still there, which casings no record tells of, and what to dig first.',
  parameters: objectSchema({
    located_at: chance(RECONCILE_DEFAULTS.locatedAt, 'A record is located where one anomaly is its well with at least this chance.'),
    ambiguous_at: chance(RECONCILE_DEFAULTS.ambiguousAt, 'It is ambiguous where no single anomaly reaches that, but all together reach this.'),
    not_searched_below: chance(RECONCILE_DEFAULTS.notSearchedBelow, 'It is not searched for where its well lies in ground searched with less than this chance.'),
    unrecorded_at: chance(RECONCILE_DEFAULTS.unrecordedAt, 'A casing is unrecorded where no record tells of it with at least this chance.'),
    casing_at: chance(RECONCILE_DEFAULTS.casingAt, 'An anomaly gets a row of its own where it is classed as a casing or is one with at least this chance.'),
    unrecorded_per_ha: { type: 'number', exclusiveMinimum: 0, description: 'Casings that no record tells of, per hectare; unsaid, one on ten hectares, raised by as many as the anomalies hold beyond what the records make likely.' },
    others_per_ha: { type: 'number', exclusiveMinimum: 0, description: 'Sources that are no casings, per hectare; unsaid, as many as the anomalies of this survey make likely.' },
  }),
  inputs: {
    records: { title: 'Records with their positions', form: 'records', optional: true },
    anomalies: { title: 'Anomalies', form: 'anomalies' },
    detection: { title: 'Chance that the stated casing would have been detected', form: 'grid', unit: '1' },
    covered: { title: 'Ground searched (1) or not (0); without it, ground where something could be detected', form: 'grid', unit: '1', optional: true },
  },
  outputs: { findings: { title: 'Findings: one row per record, and one per casing that no record tells of', form: 'findings' } },
  sources: [
    "Bayes' theorem; Koopman (1980), Search and Screening; Stone (1975), Theory of Optimal Search: what an empty search leaves",
    'Reid (1979), IEEE Trans. Autom. Control 24(6); Bar-Shalom & Fortmann (1988): joint posterior of associations',
    'Williams & Lau (2014), IEEE Trans. Aerosp. Electron. Syst. 50(4): belief propagation for large groups',
  ],
  example: 'ironplat reconcile --survey survey.json --out delivery',
  async run({ parameters, inputs, warn }) {
    const records = (inputs.records as Records | undefined) ?? NO_RECORDS;
    if (records === NO_RECORDS) warn('there are no records: every casing is one that no record tells of');
    const detection = inputs.detection as Grid;
    const covered = (inputs.covered as Grid | undefined) ?? heardSomewhere(detection);
    if (covered.width !== detection.width || covered.height !== detection.height || covered.cellM !== detection.cellM || covered.west !== detection.west || covered.north !== detection.north) {
      throw new UserError({
        code: 'value_invalid', where: 'covered grid', found: `${covered.width} × ${covered.height} cells of ${covered.cellM} m`,
        wanted: `the lattice of the detection grid, ${detection.width} × ${detection.height} cells of ${detection.cellM} m`, advice: 'take both from the same run of delineate',
      });
    }
    return { findings: matchRecords(records, inputs.anomalies as Anomalies, { detection, covered }, camelKeys<Partial<ReconcileOptions>>(parameters)) };
  },
};

/** Without a grid of what was covered: wherever there was a chance to hear anything. */
function heardSomewhere(detection: Grid): Grid {
  return { ...detection, values: Float32Array.from(detection.values, (value) => (Number.isNaN(value) ? NaN : value > 0 ? 1 : 0)) };
}
