/**
 * State Plane zones of the 48 states, Alaska and Hawaii by number: the state's two-letter code and the zone within it.
 * Source: NOAA Manual NOS NGS 5, appendix A, both datums. A number on NAD27 and on NAD83 is the same zone by name; where
 * a state has one zone on one datum and several on the other (Montana, Nebraska, South Carolina), each has its number.
 */
const ZONES = `
AL E101 W102|AZ E201 C202 W203|AR N301 S302|CA 1:401 2:402 3:403 4:404 5:405 6:406 7:407|CO N501 C502 S503|CT 600|DE 700|FL E901 W902 N903
GA E1001 W1002|ID E1101 C1102 W1103|IL E1201 W1202|IN E1301 W1302|IA N1401 S1402|KS N1501 S1502|KY N1601 S1602|LA N1701 S1702 O1703
ME E1801 W1802|MD 1900|MA M2001 I2002|MI N2111 C2112 S2113|MN N2201 C2202 S2203|MS E2301 W2302|MO E2401 C2402 W2403|MT :2500 N2501 C2502 S2503
NE :2600 N2601 S2602|NV E2701 C2702 W2703|NH 2800|NJ 2900|NM E3001 C3002 W3003|NY E3101 C3102 W3103 L3104|NC 3200|ND N3301 S3302|OH N3401 S3402
OK N3501 S3502|OR N3601 S3602|PA N3701 S3702|RI 3800|SC :3900 N3901 S3902|SD N4001 S4002|TN 4100|TX N4201 NC4202 C4203 SC4204 S4205
UT N4301 C4302 S4303|VT 4400|VA N4501 S4502|WA N4601 S4602|WV N4701 S4702|WI N4801 C4802 S4803|WY E4901 EC4902 WC4903 W4904
AK 1:5001 2:5002 3:5003 4:5004 5:5005 6:5006 7:5007 8:5008 9:5009 10:5010|HI 1:5101 2:5102 3:5103 4:5104 5:5105`;

const STATES: Readonly<Record<string, string>> = {
  AL: 'Alabama', AZ: 'Arizona', AR: 'Arkansas', CA: 'California', CO: 'Colorado', CT: 'Connecticut', DE: 'Delaware', FL: 'Florida', GA: 'Georgia',
  ID: 'Idaho', IL: 'Illinois', IN: 'Indiana', IA: 'Iowa', KS: 'Kansas', KY: 'Kentucky', LA: 'Louisiana', ME: 'Maine', MD: 'Maryland', MA: 'Massachusetts',
  MI: 'Michigan', MN: 'Minnesota', MS: 'Mississippi', MO: 'Missouri', MT: 'Montana', NE: 'Nebraska', NV: 'Nevada', NH: 'New Hampshire', NJ: 'New Jersey',
  NM: 'New Mexico', NY: 'New York', NC: 'North Carolina', ND: 'North Dakota', OH: 'Ohio', OK: 'Oklahoma', OR: 'Oregon', PA: 'Pennsylvania', RI: 'Rhode Island',
  SC: 'South Carolina', SD: 'South Dakota', TN: 'Tennessee', TX: 'Texas', UT: 'Utah', VT: 'Vermont', VA: 'Virginia', WA: 'Washington', WV: 'West Virginia',
  WI: 'Wisconsin', WY: 'Wyoming', AK: 'Alaska', HI: 'Hawaii',
};
const PARTS: Readonly<Record<string, string>> = {
  N: 'North', S: 'South', E: 'East', W: 'West', C: 'Central', NC: 'North Central', SC: 'South Central', EC: 'East Central', WC: 'West Central',
  O: 'Offshore', M: 'Mainland', I: 'Island', L: 'Long Island',
};

export interface StatePlaneZone {
  readonly zone: number;
  /** As the registry of systems names it, without datum and unit: `Pennsylvania South`, `California zone 4`. */
  readonly name: string;
}

let byNumber: Map<number, StatePlaneZone> | null = null;
let byKey: Map<string, StatePlaneZone> | null = null;

/** Tables are laid out once, on first use. */
function tables(): { byNumber: Map<number, StatePlaneZone>; byKey: Map<string, StatePlaneZone> } {
  if (byNumber !== null && byKey !== null) return { byNumber, byKey };
  byNumber = new Map();
  byKey = new Map();
  for (const entry of ZONES.trim().split(/[|\n]/)) {
    const [state, ...zones] = entry.trim().split(' ') as [string, ...string[]];
    for (const text of zones) {
      const [, part, number] = /^(?:([A-Z]+|\d*):?)?(\d+)$/.exec(text.includes(':') ? text : text.replace(/^(\d+)$/, ':$1')) as unknown as [string, string, string];
      const name = part === '' ? STATES[state]! : `${STATES[state]!} ${PARTS[part] ?? `zone ${part}`}`;
      const zone = { zone: Number(number), name };
      byNumber.set(zone.zone, zone);
      byKey.set(`${state} ${part}`, zone);
    }
  }
  return { byNumber, byKey };
}

/** A zone by its number (3702), null where there is none. */
export function zoneByNumber(zone: number): StatePlaneZone | null {
  return tables().byNumber.get(zone) ?? null;
}

/** A zone by state code and part: (`PA`, `S`), (`CA`, `4`), (`NJ`, ``); null where there is none. */
export function zoneOf(state: string, part: string): StatePlaneZone | null {
  return tables().byKey.get(`${state} ${part}`) ?? null;
}

export function stateZones(): StatePlaneZone[] {
  return [...tables().byNumber.values()];
}

const STATE_CODES: ReadonlyMap<string, string> = new Map(Object.entries(STATES).map(([code, name]) => [name.toUpperCase(), code]));

/** Code of a state by name (`WEST VIRGINIA`) or code (`WV`), upper case; null for anything else. */
export function stateCode(text: string): string | null {
  return STATE_CODES.get(text) ?? (Object.hasOwn(STATES, text) ? text : null);
}
