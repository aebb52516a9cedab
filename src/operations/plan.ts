import { PLAN_DEFAULTS, planSurvey, type PlanOptions } from '../plan/planSurvey.js';
import type { Records } from '../records/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, quantitySchema } from './schema.js';
import type { Operation } from './types.js';

/** Records and parcel to lines that can be walked. */
export const plan: Operation = {
  id: 'plan',
  version: '1.0.0',
  title: 'Search plan',
  summary: 'Lays survey and tie lines over the parcel, or over the ground where the records may be, orders them so that little way is walked for nothing, and says what chance of success the plan promises for each record.',
  parameters: objectSchema({
    area: { type: 'string', enum: ['parcel', 'records'], default: PLAN_DEFAULTS.area, description: 'The whole parcel, or the ground that the records\' ellipses cover.' },
    record_share: { type: 'number', exclusiveMinimum: 0, exclusiveMaximum: 1, default: PLAN_DEFAULTS.recordShare, description: 'For "records": share of a position\'s chance that its ellipse holds.' },
    margin_m: quantitySchema('m', { minimum: 0, default: PLAN_DEFAULTS.marginM, description: 'For "records": ground searched beyond the ellipses.' }),
    spacing_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'Distance between survey lines; unsaid, the widest that keeps spacing_chance.', examples: [8] }),
    spacing_chance: { type: 'number', exclusiveMinimum: 0, exclusiveMaximum: 1, default: PLAN_DEFAULTS.spacingChance, description: 'Chance of detecting the target at the worst place between two lines.' },
    azimuth_deg: quantitySchema('deg', { description: 'Direction of the lines, clockwise from grid north; unsaid, along the ground\'s longer side.' }),
    tie_ratio: { type: 'number', minimum: 0, default: PLAN_DEFAULTS.tieRatio, description: 'Tie lines lie this many spacings apart; 0 for none.' },
    min_length_m: quantitySchema('m', { minimum: 0, default: PLAN_DEFAULTS.minLengthM, description: 'Pieces of a line shorter than this are left out.' }),
    sortie_length_m: quantitySchema('m', { exclusiveMinimum: 0, default: PLAN_DEFAULTS.sortieLengthM, description: 'Way of one outing, the ways between lines included.' }),
    sensor_m: quantitySchema('m', { exclusiveMinimum: 0, default: PLAN_DEFAULTS.sensorM, description: 'Sensor above ground.' }),
    white_nt: quantitySchema('nT', { minimum: 0, default: PLAN_DEFAULTS.whiteNt, description: 'Noise to be expected in a single reading (one standard deviation).' }),
    geology_nt: quantitySchema('nT', { minimum: 0, default: PLAN_DEFAULTS.geologyNt, description: 'Noise to be expected from the ground (one standard deviation).' }),
    geology_m: quantitySchema('m', { exclusiveMinimum: 0, default: PLAN_DEFAULTS.geologyM, description: 'Distance over which the ground\'s noise changes.' }),
    position_sd_m: quantitySchema('m', { minimum: 0, default: PLAN_DEFAULTS.positionSdM, description: 'Error to be expected in a position, per axis (one standard deviation).' }),
    position_corr_s: quantitySchema('s', { minimum: 0, default: PLAN_DEFAULTS.positionCorrS, description: 'Time over which the position error wanders.' }),
    false_alarms_per_ha: { type: 'number', exclusiveMinimum: 0, default: PLAN_DEFAULTS.falseAlarmsPerHa, description: 'False alarms by noise alone that are put up with on a hectare.' },
  }),
  inputs: { records: { title: 'Positions with error', form: 'records', optional: true } },
  outputs: { plan: { title: 'Search area, lines in walking order, chances', form: 'plan' } },
  sources: [
    'Freeman & Shapira (1975), minimum-area enclosing rectangle',
    'Choset & Pignon (1998), boustrophedon decomposition; Croes (1958) and Or (1976), improving a tour',
    'Lozano-Pérez & Wesley (1979), shortest ways among obstacles',
    'Koopman (1980), Stone (1975): search theory; Kay (1998): detection',
  ],
  example: 'ironplat plan --survey survey.json --spacing-m 8 --out delivery',
  async run({ site, parameters, inputs, progress }) {
    progress('Laying lines');
    return { plan: planSurvey(site, (inputs.records as Records | undefined) ?? null, camelKeys<PlanOptions>(parameters)) };
  },
};
