import { objectSchema, pathSchema, rangeSchema } from '../operations/schema.js';
import type { ObjectSchema } from '../operations/types.js';
import { SITE_DEFAULTS } from '../site/makeSite.js';

/** What a survey file says once for all operations. */
export const COMMON_SCHEMA: ObjectSchema = objectSchema({
  $schema: { type: 'string', description: 'Where the schema of this file is, for completion in an editor.' },
  title: { type: 'string', minLength: 1, description: 'Name of the survey, as it stands over the report.', default: SITE_DEFAULTS.title },
  crs: { type: 'string', description: 'The survey\'s own projected CRS, such as "EPSG:2272": outputs stand in it.', examples: ['EPSG:2272', 'EPSG:26917'] },
  date: { type: 'string', pattern: '^\\d{4}-\\d{2}-\\d{2}$', description: 'Date of the field work, as in 2026-04-14: the main field is computed for it.' },
  seed: { type: 'integer', minimum: 0, description: 'Where random draws start from.', default: SITE_DEFAULTS.seed },
  parcel: pathSchema({ description: 'The ground to be searched: polygons in GeoJSON, Shapefile or FlatGeobuf.' }),
  parcel_crs: { type: 'string', description: 'CRS of the parcel and exclusions where their files do not say it.' },
  exclusions: { type: 'array', items: pathSchema({}), description: 'Ground that cannot be walked (buildings, water): polygon files.', default: SITE_DEFAULTS.exclusions },
  grids: { type: 'array', items: pathSchema({}), description: 'Datum-shift grids (NTv2, GeoTIFF, CTABLE V2), or folders of them.', default: SITE_DEFAULTS.grids },
  receiver: objectSchema({
    frame: { type: 'string', enum: ['WGS 84', 'ITRF2014', 'ITRF2020', 'NAD83(2011)'], description: 'Reference frame that the receiver\'s positions stand in.' },
    epoch: { type: 'number', minimum: 1980, maximum: 2100, description: 'When they were taken, decimal year; the date where it is not said.' },
  }, { required: ['frame'], description: 'What the receiver\'s "WGS 84" really is. Unsaid, WGS 84 and NAD83 are taken as the same within a stated accuracy of metres.' }),
  target: objectSchema({
    pole_am: rangeSchema('A.m', { description: 'Pole strength of the casing\'s top, lowest and highest.' }),
    depth_m: rangeSchema('m', { description: 'Depth of the casing\'s top below ground, lowest and highest.', default: SITE_DEFAULTS.depthM }),
    casing: objectSchema({
      od_in: { type: 'number', exclusiveMinimum: 0, description: 'Outside diameter, inches (API Spec 5CT).' },
      lb_per_ft: { type: 'number', exclusiveMinimum: 0, description: 'Nominal weight, pounds per foot (API Spec 5CT).' },
      magnetisation_a_per_m: { type: 'array', items: { type: 'number', exclusiveMinimum: 0 }, minItems: 2, maxItems: 2, description: 'Magnetisation of the steel, A/m, lowest and highest.' },
    }, { required: ['od_in', 'lb_per_ft', 'magnetisation_a_per_m'], description: 'The casing by its size instead of its pole strength.' }),
  }, { description: 'The casing that is looked for. Chances of detection hold for it and for nothing else.' }),
}, { required: ['crs', 'date', 'parcel'] });
