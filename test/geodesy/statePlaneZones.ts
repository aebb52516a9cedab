import { crs, crsCodes } from '../../src/geodesy/crs.js';
import type { Crs } from '../../src/geodesy/types.js';

/** State Plane zone numbers and names. Source: NOAA Manual NOS NGS 5, appendix A, for both datums. */
const ZONES: Readonly<Record<number, string>> = {
  101: 'Alabama East', 102: 'Alabama West', 201: 'Arizona East', 202: 'Arizona Central', 203: 'Arizona West', 301: 'Arkansas North', 302: 'Arkansas South',
  501: 'Colorado North', 502: 'Colorado Central', 503: 'Colorado South', 600: 'Connecticut', 700: 'Delaware', 901: 'Florida East', 902: 'Florida West', 903: 'Florida North',
  1001: 'Georgia East', 1002: 'Georgia West', 1101: 'Idaho East', 1102: 'Idaho Central', 1103: 'Idaho West', 1201: 'Illinois East', 1202: 'Illinois West',
  1301: 'Indiana East', 1302: 'Indiana West', 1401: 'Iowa North', 1402: 'Iowa South', 1501: 'Kansas North', 1502: 'Kansas South', 1601: 'Kentucky North', 1602: 'Kentucky South',
  1701: 'Louisiana North', 1702: 'Louisiana South', 1703: 'Louisiana Offshore', 1801: 'Maine East', 1802: 'Maine West', 1900: 'Maryland', 2001: 'Massachusetts Mainland',
  2002: 'Massachusetts Island', 2101: 'Michigan East', 2102: 'Michigan Old Central', 2103: 'Michigan West', 2111: 'Michigan North', 2112: 'Michigan Central', 2113: 'Michigan South',
  2201: 'Minnesota North', 2202: 'Minnesota Central', 2203: 'Minnesota South', 2301: 'Mississippi East', 2302: 'Mississippi West', 2401: 'Missouri East', 2402: 'Missouri Central',
  2403: 'Missouri West', 2500: 'Montana', 2501: 'Montana North', 2502: 'Montana Central', 2503: 'Montana South', 2600: 'Nebraska', 2601: 'Nebraska North', 2602: 'Nebraska South',
  2701: 'Nevada East', 2702: 'Nevada Central', 2703: 'Nevada West', 2800: 'New Hampshire', 2900: 'New Jersey', 3001: 'New Mexico East', 3002: 'New Mexico Central', 3003: 'New Mexico West',
  3101: 'New York East', 3102: 'New York Central', 3103: 'New York West', 3104: 'New York Long Island', 3200: 'North Carolina', 3301: 'North Dakota North', 3302: 'North Dakota South',
  3401: 'Ohio North', 3402: 'Ohio South', 3501: 'Oklahoma North', 3502: 'Oklahoma South', 3601: 'Oregon North', 3602: 'Oregon South', 3701: 'Pennsylvania North', 3702: 'Pennsylvania South',
  3800: 'Rhode Island', 3900: 'South Carolina', 3901: 'South Carolina North', 3902: 'South Carolina South', 4001: 'South Dakota North', 4002: 'South Dakota South', 4100: 'Tennessee',
  4201: 'Texas North', 4202: 'Texas North Central', 4203: 'Texas Central', 4204: 'Texas South Central', 4205: 'Texas South', 4301: 'Utah North', 4302: 'Utah Central', 4303: 'Utah South',
  4400: 'Vermont', 4501: 'Virginia North', 4502: 'Virginia South', 4601: 'Washington North', 4602: 'Washington South', 4701: 'West Virginia North', 4702: 'West Virginia South',
  4801: 'Wisconsin North', 4802: 'Wisconsin Central', 4803: 'Wisconsin South', 4901: 'Wyoming East', 4902: 'Wyoming East Central', 4903: 'Wyoming West Central', 4904: 'Wyoming West',
  5200: 'Puerto Rico & Virgin Is.',
};
const ROMAN = ['', 'I', 'II', 'III', 'IV', 'V', 'VI', 'VII'];
/** On NAD27 these numbers lie on datums of their own (Old Hawaiian, Puerto Rico, American Samoa, Guam), outside the registry. */
const OTHER_DATUMS = new Set([5101, 5102, 5103, 5104, 5105, 5201, 5202, 5300, 5400]);

let byName: Map<string, Crs> | null = null;

/** The registry's system for an old zone number; null for a NAD27 zone on a datum of its own. Throws where a zone is not found. */
export function statePlaneZone(datum: 'NAD27' | 'NAD83', zone: number): Crs | null {
  if (datum === 'NAD27' && OTHER_DATUMS.has(zone)) return null;
  byName ??= new Map(crsCodes().map((code) => [crs(code).name, crs(code)]));
  const found = byName.get(`${datum} / ${zoneName(datum, zone)}`);
  if (found === undefined) throw new Error(`no ${datum} zone ${zone}`);
  return found;
}

function zoneName(datum: 'NAD27' | 'NAD83', zone: number): string | undefined {
  const last = zone % 100;
  if (zone >= 5001 && zone <= 5010) return `Alaska zone ${last}`;
  if (zone >= 401 && zone <= 407) return `California zone ${datum === 'NAD27' ? ROMAN[last] : last}`;
  if (zone >= 5101 && zone <= 5105) return `Hawaii zone ${last}`;
  return ZONES[zone];
}
