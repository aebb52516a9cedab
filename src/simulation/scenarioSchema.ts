import { CASING_DEFAULTS, PIPELINE_DEFAULTS, SCENARIO_DEFAULTS as D } from './scenarioDefaults.js';

const POINT = { type: 'array', items: { type: 'number' }, minItems: 2, maxItems: 2 } as const;
const AT = { ...POINT, title: 'Easting and northing', description: 'In the unit that `coordinates` states.' } as const;
const POLYGONS = {
  type: 'array', items: { type: 'array', minItems: 1, items: { type: 'array', minItems: 3, items: POINT } },
  description: 'Polygons; each is a list of rings, the outer one first, then its holes.',
} as const;
const ID = { type: 'string', minLength: 1, title: 'Name in the truth file' } as const;

type Unit = 'm' | 's' | 'nT' | 'deg' | 'A.m';

function quantity<U extends Unit>(title: string, unit: U, value: number, minimum?: number) {
  return { type: 'number', title, default: value, 'x-unit': unit, ...(minimum === undefined ? {} : { minimum }) } as const;
}

function share(title: string, value: number) {
  return { type: 'number', title, default: value, minimum: 0, maximum: 1 } as const;
}

function number(title: string, value: number, minimum?: number) {
  return { type: 'number', title, default: value, ...(minimum === undefined ? {} : { minimum }) } as const;
}

function section<const P extends object>(title: string, value: object, properties: P) {
  return { type: 'object', title, default: value, additionalProperties: false, properties } as const;
}

/** JSON Schema 2020-12 of a scenario file; `x-unit` marks a quantity as in the parameters of operations. */
export const SCENARIO_SCHEMA = {
  type: 'object',
  title: 'Scenario of a made field day',
  description: 'Sources in the ground, the walk over them and the instruments, from which readings and a base log are made.',
  additionalProperties: false,
  required: ['frame', 'parcel', 'start'],
  properties: {
    $schema: { type: 'string' },
    title: { type: 'string', default: D.title },
    seed: { type: 'integer', title: 'Seed of everything random', default: D.seed },
    frame: { type: 'string', title: 'Projected CRS', pattern: '^EPSG:\\d+$', examples: ['EPSG:2272'] },
    coordinates: {
      type: 'string', enum: ['metres', 'crs_units'], default: D.coordinates, title: 'Unit of all eastings and northings',
      description: '`crs_units` is the unit of the CRS as published, such as US survey feet.',
    },
    parcel: { ...POLYGONS, title: 'Ground to be walked', minItems: 1 },
    exclusions: { ...POLYGONS, title: 'Ground nobody may walk', default: D.exclusions },
    start: { type: 'string', title: 'First reading', description: 'ISO 8601 with zone.', examples: ['2026-04-14T13:05:00Z'] },
    receiver: section('Satellite receiver', D.receiver, {
      frame: { type: 'string', title: 'Frame of its positions', enum: ['WGS 84', 'ITRF2014', 'ITRF2020', 'NAD83(2011)'], default: D.receiver.frame },
      epoch: number('Epoch, decimal year', D.receiver.epoch),
    }),
    ground_height_m: quantity('Ground above the ellipsoid', 'm', D.ground_height_m),
    lines: section('Lines', D.lines, {
      spacing_m: { ...quantity('Line spacing', 'm', D.lines.spacing_m), exclusiveMinimum: 0 },
      azimuth_deg: quantity('Azimuth of the lines from grid north', 'deg', D.lines.azimuth_deg),
      sensor_height_m: { ...quantity('Sensor above ground', 'm', D.lines.sensor_height_m), exclusiveMinimum: 0 },
      speed_m_s: { type: 'number', title: 'Walking speed, m/s', default: D.lines.speed_m_s, exclusiveMinimum: 0 },
      rate_hz: { type: 'number', title: 'Readings a second', default: D.lines.rate_hz, exclusiveMinimum: 0 },
      margin_m: quantity('Distance kept from the edge of the open ground', 'm', D.lines.margin_m, 0),
      every: { type: 'integer', title: 'Walk only each n-th line', default: D.lines.every, minimum: 1 },
      tie_spacing_m: quantity('Spacing of tie lines, 0 for none', 'm', D.lines.tie_spacing_m, 0),
      unwalked: {
        type: 'array', title: 'Circles of ground that is not walked', default: D.lines.unwalked,
        items: {
          type: 'object', additionalProperties: false, required: ['at', 'radius_m'],
          properties: { at: AT, radius_m: { type: 'number', title: 'Radius', minimum: 0, 'x-unit': 'm' } },
        },
      },
    }),
    walk: section('Walk', D.walk, {
      sway_m: quantity('True path to the side of the line, standard deviation', 'm', D.walk.sway_m, 0),
      bob_m: quantity('True height of the sensor about the stated one, standard deviation', 'm', D.walk.bob_m, 0),
      speed_variation: share('Variation of the speed, as a share of it', D.walk.speed_variation),
      yaw_deg: quantity('Yaw of the sensor about the course, standard deviation', 'deg', D.walk.yaw_deg, 0),
      turn_s: quantity('Time lost at a turn', 's', D.walk.turn_s, 0),
    }),
    position: section('Recorded position', D.position, {
      sd_m: quantity('Slow error on each axis, standard deviation', 'm', D.position.sd_m, 0),
      correlation_s: quantity('Correlation time of the slow error', 's', D.position.correlation_s, 0),
      white_m: quantity('Independent error on each axis, standard deviation', 'm', D.position.white_m, 0),
      lag_s: quantity('Position older than the reading by', 's', D.position.lag_s),
    }),
    sensor: section('Sensor', D.sensor, {
      noise_nt: quantity('White noise, standard deviation', 'nT', D.sensor.noise_nt, 0),
      dropout_share: share('Chance at each reading that a dropout begins', D.sensor.dropout_share),
      dropout_run: { type: 'integer', title: 'Longest dropout, readings', default: D.sensor.dropout_run, minimum: 1 },
      spike_share: share('Chance of a spike at each reading', D.sensor.spike_share),
      spike_nt: quantity('Middling size of a spike', 'nT', D.sensor.spike_nt, 0),
    }),
    heading: section('Heading effect', D.heading, {
      first_nt: quantity('First harmonic', 'nT', D.heading.first_nt),
      first_phase_deg: quantity('Direction of its maximum', 'deg', D.heading.first_phase_deg),
      second_nt: quantity('Second harmonic', 'nT', D.heading.second_nt),
      second_phase_deg: quantity('Phase of the second harmonic', 'deg', D.heading.second_phase_deg),
    }),
    variation: section('Variation of the main field', D.variation, {
      daily_nt: quantity('Daily wave, peak to peak', 'nT', D.variation.daily_nt, 0),
      pulsation_nt: quantity('Pulsations, standard deviation', 'nT', D.variation.pulsation_nt, 0),
      pulsation_s: { ...quantity('Pulsations, middle period', 's', D.variation.pulsation_s), exclusiveMinimum: 0 },
    }),
    base: section('Base station', D.base, {
      interval_s: { ...quantity('Time between base readings', 's', D.base.interval_s), exclusiveMinimum: 0 },
      noise_nt: quantity('White noise, standard deviation', 'nT', D.base.noise_nt, 0),
      offset_nt: quantity('Field at the base above the main field', 'nT', D.base.offset_nt),
      lead_s: quantity('Runs this long before the first and after the last reading', 's', D.base.lead_s),
      gaps: {
        type: 'array', title: 'Times without base readings', default: D.base.gaps,
        items: {
          type: 'object', additionalProperties: false, required: ['from_s', 'length_s'],
          properties: {
            from_s: { type: 'number', title: 'Seconds after the start', 'x-unit': 's' },
            length_s: { type: 'number', title: 'Length', minimum: 0, 'x-unit': 's' },
          },
        },
      },
      spikes: { type: 'integer', title: 'False readings in the base log', default: D.base.spikes, minimum: 0 },
    }),
    geology: section('Soil and rock', D.geology, {
      slope_nt_km: number('Slope, nT per km', D.geology.slope_nt_km),
      slope_azimuth_deg: quantity('Direction in which it rises', 'deg', D.geology.slope_azimuth_deg),
      waves: {
        type: 'array', title: 'Smooth random fields', default: D.geology.waves,
        items: {
          type: 'object', additionalProperties: false, required: ['rms_nt', 'wavelength_m'],
          properties: {
            rms_nt: { type: 'number', title: 'Root mean square', minimum: 0, 'x-unit': 'nT' },
            wavelength_m: { type: 'number', title: 'Wavelength', exclusiveMinimum: 0, 'x-unit': 'm' },
          },
        },
      },
    }),
    steel: section('Steel of casings', D.steel, {
      joint_spread: { type: 'number', title: 'Spread of the pole strength of joints, as a share of the top\'s', default: D.steel.joint_spread, minimum: 0 },
      reversed_share: share('Chance that a joint is magnetised in reverse', D.steel.reversed_share),
    }),
    casings: {
      type: 'array', title: 'Casings in the ground', default: D.casings,
      items: {
        type: 'object', additionalProperties: false, required: ['id', 'at', 'pole_am'],
        properties: {
          id: ID, at: AT,
          top_depth_m: quantity('Top below ground', 'm', CASING_DEFAULTS.top_depth_m, 0),
          pole_am: { type: 'number', title: 'Pole strength, positive where the top attracts', 'x-unit': 'A.m' },
          length_m: { ...quantity('Length of the steel', 'm', CASING_DEFAULTS.length_m), exclusiveMinimum: 0 },
          tilt_deg: quantity('Off the vertical', 'deg', CASING_DEFAULTS.tilt_deg, 0),
          tilt_azimuth_deg: quantity('Azimuth towards which it leans going down', 'deg', CASING_DEFAULTS.tilt_azimuth_deg),
        },
      },
    },
    pipelines: {
      type: 'array', title: 'Steel pipelines', default: D.pipelines,
      items: {
        type: 'object', additionalProperties: false, required: ['id', 'points'],
        properties: {
          id: ID, points: { type: 'array', items: POINT, minItems: 2 },
          depth_m: quantity('Depth of its axis', 'm', PIPELINE_DEFAULTS.depth_m, 0),
          joint_m: { ...quantity('Length of a joint', 'm', PIPELINE_DEFAULTS.joint_m), exclusiveMinimum: 0 },
          pole_sd_am: quantity('Pole strength of a joint, standard deviation', 'A.m', PIPELINE_DEFAULTS.pole_sd_am, 0),
          induced_am2_m: number('Induced moment per metre, A·m²/m', PIPELINE_DEFAULTS.induced_am2_m),
        },
      },
    },
    scrap: {
      type: 'array', title: 'Compact iron', default: D.scrap,
      items: {
        type: 'object', additionalProperties: false, required: ['id', 'at', 'moment_am2'],
        properties: {
          id: ID, at: AT, depth_m: quantity('Depth', 'm', 0.3),
          moment_am2: { type: 'array', items: { type: 'number' }, minItems: 3, maxItems: 3, title: 'Moment east, north, up, A·m²' },
        },
      },
    },
    pulled: {
      type: 'array', title: 'Wells whose casing was pulled', description: 'They make no field; they stand in the truth alone.', default: D.pulled,
      items: { type: 'object', additionalProperties: false, required: ['id', 'at'], properties: { id: ID, at: AT } },
    },
  },
} as const;
