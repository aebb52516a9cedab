import type { Random } from '../../../src/numerics/random.js';
import type { AliquotStep, Side } from '../../../src/geodesy/sections/types.js';
import type { CornerName, LocationStatement, SectionStatement, SingleStatement } from '../../../src/records/locationText/types.js';
import { calls, dms, geo, mapCorner, MINUTE, part, projected, SECOND, section, tie, trs, UTM17, type LengthText } from './statements.js';

export interface Made {
  readonly text: string;
  readonly statement: LocationStatement;
}

export function pick<T>(random: Random, from: readonly T[]): T {
  return from[random.integer(from.length)]!;
}

const maybe = (random: Random, text: string): string => (random.uniform() < 0.5 ? text : '');

/** An angle in one of the spellings, its value as it is written, and the worth of its last digit. */
function angle(random: Random, least: number, most: number): { text: string; deg: number; digit: number } {
  const d = least + random.integer(most - least);
  const m = random.integer(60);
  const decimals = random.integer(4);
  const digit = Number(`1e-${decimals}`);
  const s = (random.uniform() * 60 * (1 - 1e-6)).toFixed(decimals);
  if (Number(s) >= 60) return angle(random, least, most);
  const mm = String(m).padStart(2, '0');
  switch (random.integer(7)) {
    case 0: {
      const places = 1 + random.integer(7);
      const text = (d + random.uniform()).toFixed(places);
      return { text: text + maybe(random, '°'), deg: Number(text), digit: Number(`1e-${places}`) };
    }
    case 1: return { text: `${d}°${s}'`, deg: dms(d, Number(s)), digit: digit * MINUTE };
    case 2: return { text: `${d}°${mm}'${s}"`, deg: dms(d, m, Number(s)), digit: digit * SECOND };
    case 3: return { text: `${d}-${mm}-${s}`, deg: dms(d, m, Number(s)), digit: digit * SECOND };
    case 4: return { text: `${d} ${mm} ${s}`, deg: dms(d, m, Number(s)), digit: digit * SECOND };
    case 5: return { text: `${d} deg ${m} min ${s} sec`, deg: dms(d, m, Number(s)), digit: digit * SECOND };
    default: return { text: `${d}º ${m}′ ${s}″`, deg: dms(d, m, Number(s)), digit: digit * SECOND };
  }
}

const DATUMS = [['', undefined], [' NAD27', 'NAD27'], [' NAD 83', 'NAD83'], [' WGS84', 'WGS 84']] as const;

export function makeGeographic(random: Random): Made & { statement: SingleStatement } {
  const lat = angle(random, 25, 49);
  const lon = angle(random, 67, 124);
  const [datumText, datum] = pick(random, DATUMS);
  const rest = datum === undefined ? {} : { datum };
  const digits = [lat.digit, lon.digit] as const;
  switch (random.integer(5)) {
    case 0: return { text: `${lat.text} N${pick(random, [' ', ', ', '; ', ' / ', ' and '])}${lon.text} W${datumText}`, statement: geo(lat.deg, -lon.deg, digits, rest) };
    case 1: return { text: `N ${lat.text} W ${lon.text}${datumText}`, statement: geo(lat.deg, -lon.deg, digits, rest) };
    case 2: return { text: `Lat ${lat.text}, Long -${lon.text}${datumText}`, statement: geo(lat.deg, -lon.deg, digits, rest) };
    case 3: return { text: `Longitude: ${lon.text} Latitude: ${lat.text}${datumText}`, statement: geo(lat.deg, lon.deg, digits, { ...rest, lonSide: 'unsaid' }) };
    default: return { text: `-${lon.text}, ${lat.text}${datumText}`, statement: geo(lat.deg, -lon.deg, digits, rest) };
  }
}

/** A length of at most so many feet. */
function length(random: Random, mostFt: number): { text: string; length: LengthText } {
  const ft = 1 + random.integer(Math.floor(mostFt) - 1);
  const grouped = ft >= 1000 && random.uniform() < 0.5 ? `${Math.floor(ft / 1000)},${String(ft % 1000).padStart(3, '0')}` : String(ft);
  switch (random.integer(6)) {
    case 0: return { text: `${grouped}'`, length: ft };
    case 1: return { text: `${grouped} feet`, length: ft };
    case 2: return { text: `${ft}.${random.integer(10)} ft`, length: [0, 'ft', 0.1] };
    case 3: return { text: `${ft}½ ft`, length: [ft + 0.5, 'ft', 0.5] };
    case 4: {
      const rods = 1 + random.integer(Math.floor(mostFt / 16.5));
      return { text: `${rods} rods`, length: [rods, 'rod'] };
    }
    default: {
      const chains = 1 + random.integer(Math.floor(mostFt / 66));
      return { text: `${chains} chains`, length: [chains, 'chain'] };
    }
  }
}

/** The decimal of a length, put in where its text has it. */
function lengthUpTo(random: Random, mostFt: number): { text: string; length: LengthText } {
  const made = length(random, mostFt - 1);
  return Array.isArray(made.length) && made.length[0] === 0 ? { text: made.text, length: [Number.parseFloat(made.text), 'ft', 0.1] } : made;
}

const WORDS: Readonly<Record<Side, string>> = { N: 'north', S: 'south', E: 'east', W: 'west' };
const STEPS: readonly AliquotStep[] = ['NE', 'NW', 'SE', 'SW', 'N2', 'S2', 'E2', 'W2'];

function aliquot(random: Random): { text: string; steps: AliquotStep[] } {
  const steps = Array.from({ length: 1 + random.integer(3) }, () => pick(random, STEPS));
  const style = random.integer(4);
  const words = steps.map((step) => {
    const half = step[1] === '2';
    const name = half ? step[0]! : step;
    return [`${name}/${half ? 2 : 4}`, `${name}${half ? '½' : '¼'}`, `${name} 1/${half ? 2 : 4}`, half ? `${name}2` : name][style]!;
  });
  return { text: words.join(pick(random, [' ', ' of ', ' of the '])), steps: steps.toReversed() };
}

function reference(random: Random): { text: string; reference: NonNullable<SectionStatement['reference']> } {
  const [s, t, r] = [1 + random.integer(36), 1 + random.integer(120), 1 + random.integer(100)];
  const [ns, ew] = [pick(random, ['N', 'S'] as const), pick(random, ['E', 'W'] as const)];
  const half = random.uniform() < 0.1 ? '½' : '';
  const text = pick(random, [
    `Sec ${s}-T${t}${half}${ns}-R${r}${ew}`, `Sec. ${s}, T. ${t}${half} ${ns}., R. ${r} ${ew}.`, `T${t}${half}${ns} R${r}${ew} S${s}`, `S${s} T${t}${half}${ns} R${r}${ew}`,
    `${s}-${t}${half}${ns}-${r}${ew}`, `Section ${s}, Township ${t}${half} ${ns === 'N' ? 'North' : 'South'}, Range ${r} ${ew === 'E' ? 'East' : 'West'}`, `T${t}${half}${ns}-R${r}${ew}-${s}`,
  ]);
  const meridian = random.uniform() < 0.2 ? pick(random, [[' 6th P.M.', 'Sixth'], [', Willamette Meridian', 'Willamette'], [' NMPM', 'New Mexico']] as const) : null;
  return { text: text + (meridian?.[0] ?? ''), reference: trs(`${s}-${t}${half}${ns}-${r}${ew}`, meridian === null ? {} : { meridian: meridian[1] }) };
}

export function makeSection(random: Random): Made & { statement: SingleStatement } {
  const place = reference(random);
  switch (random.integer(5)) {
    case 0: return { text: place.text, statement: section({ reference: place.reference }) };
    case 1: {
      const named = aliquot(random);
      const centre = random.uniform() < 0.3;
      const text = `${centre ? 'C ' : ''}${named.text}${pick(random, [' ', ', ', ' of '])}${place.text}`;
      return { text, statement: section({ part: { steps: named.steps }, centre, reference: place.reference }) };
    }
    case 2: return corner(random, place);
    default: return footage(random, place);
  }
}

type Place = ReturnType<typeof reference>;

function footage(random: Random, place: Place): Made & { statement: SingleStatement } {
  const inPart = random.uniform() < 0.3;
  const quarter = pick(random, ['NE', 'NW', 'SE', 'SW'] as const);
  const most = inPart ? 2640 : 5280;
  const [ns, ew] = [pick(random, ['N', 'S'] as const), pick(random, ['E', 'W'] as const)];
  const [one, two] = [lengthUpTo(random, most), lengthUpTo(random, most)];
  const say = pick(random, [
    (text: string, side: Side) => `${text} F${side}L`,
    (text: string, side: Side) => `${text} from ${side} line`,
    (text: string, side: Side) => `${text} from the ${WORDS[side]} line`,
    (text: string, side: Side) => `F${side}L ${text}`,
    (text: string, side: Side) => `${text} fr ${side}/L`,
  ]);
  const turned = random.uniform() < 0.5;
  const both = turned ? [say(two.text, ew), say(one.text, ns)] : [say(one.text, ns), say(two.text, ew)];
  const text = `${both.join(pick(random, [' ', ', ', ' & ', ' and ']))}${inPart ? ` of the ${quarter}/4` : ''}, ${place.text}`;
  const args = [[one.length, ns], [two.length, ew]] as const;
  const rest = { reference: place.reference, ...(inPart ? { of: part(quarter), part: part(quarter) } : {}) };
  return { text, statement: turned ? calls(args[1], args[0], rest) : calls(args[0], args[1], rest) };
}

function corner(random: Random, place: Place): Made & { statement: SingleStatement } {
  const [name, ns, ew] = pick(random, [['NE', 'S', 'W'], ['SW', 'N', 'E'], ['NW', 'S', 'E'], ['SE', 'N', 'W']] as ReadonlyArray<readonly [CornerName, Side, Side]>);
  const [one, two] = [lengthUpTo(random, 2640), lengthUpTo(random, 2640)];
  const text = `${one.text} ${ns} and ${two.text} ${ew} of ${pick(random, ['', 'the '])}${name} ${pick(random, ['cor', 'corner', 'Cor.'])} ${place.text}`;
  return { text, statement: tie(name, [[one.length, ns], [two.length, ew]], { reference: place.reference }) };
}

export function makeProjected(random: Random): Made & { statement: SingleStatement } {
  const [e, n] = [200_000 + random.integer(600_000), 2_800_000 + random.integer(2_500_000)];
  const text = pick(random, [`UTM zone 17N ${e} E ${n} N`, `UTM 17 ${e} ${n}`, `Easting ${e} m, Northing ${n} m, UTM 17`, `N ${n} E ${e} UTM Zone 17`, `${n}mN ${e}mE UTM 17T`]);
  return { text, statement: projected(e, n, UTM17) };
}

export function makeMapCorner(random: Random): Made & { statement: SingleStatement } {
  const [latMinutes, lonMinutes] = [random.integer(8), random.integer(8)].map((i) => 7.5 * i) as [number, number];
  const write = (d: number, minutes: number): string => `${d}°${String(Math.floor(minutes)).padStart(2, '0')}'${minutes % 1 === 0 ? '00' : '30'}"`;
  const [d, l] = [25 + random.integer(24), 67 + random.integer(57)];
  const [north, east] = [random.integer(40_000), random.integer(40_000)];
  const text = `${north.toLocaleString('en-US')}' S of ${write(d, latMinutes)}, ${east.toLocaleString('en-US')}' W of ${write(l, lonMinutes)}`;
  const [latDeg, lonDeg] = [dms(d, Math.floor(latMinutes), (latMinutes % 1) * 60), dms(l, Math.floor(lonMinutes), (lonMinutes % 1) * 60)];
  return { text, statement: mapCorner(latDeg, lonDeg, { north: -north, east: -east }) };
}

const MAKERS = [makeGeographic, makeSection, makeSection, makeProjected, makeMapCorner];

/** A location text in one of the spellings of the grammar, and what it says; one in six says two things. */
export function make(random: Random): Made {
  if (random.uniform() > 1 / 6) return pick(random, MAKERS)(random);
  const [one, two] = [makeSection(random), pick(random, [makeGeographic, makeProjected])(random)];
  return { text: `${one.text}; ${two.text}`, statement: { kind: 'combined', parts: [one.statement, two.statement] } };
}

const ALPHABET = [...'0123456789.,;:-+/()\'"° NSEWFLTRCMOADU½¼', '\u2032', '\u2033', '\u0000', '\uD83D', 'of', ' and ', 'line', 'NE/4', 'Sec ', 'lot', 'cor', '1e9', '99999999999999999999'];

/** The text with one to four slips: a character lost, doubled, changed, two exchanged, a piece cut out, or another text mixed in. */
export function mutate(random: Random, text: string, other: string): string {
  let out = text;
  for (let slips = 1 + random.integer(4); slips > 0; slips--) {
    const at = random.integer(out.length + 1);
    switch (random.integer(6)) {
      case 0: out = out.slice(0, at) + out.slice(at + 1); break;
      case 1: out = out.slice(0, at) + (out[at] ?? '') + out.slice(at); break;
      case 2: out = out.slice(0, at) + pick(random, ALPHABET) + out.slice(at + 1); break;
      case 3: out = out.slice(0, at) + pick(random, ALPHABET) + out.slice(at); break;
      case 4: out = out.slice(0, at) + out.slice(Math.min(out.length, at + random.integer(12))); break;
      default: out = out.slice(0, at) + other.slice(random.integer(other.length));
    }
  }
  return out;
}

const SOUP = (
  "N S E W north South EAST w NE SW NESW C center cor corner /4 /2 1/4 ½ ¼ 2 4 12 36 37 5N 3W T5N R3W T R Sec Section S12 S2 Lot lots 3 660 660' 1,980 1980 39.3 80.2 -80.2 39-22-30 "
  + '39°22\'30" ° \' " deg min sec 543210 4349500 392230N 0801500W UTM zone 17 17N SPCS 3702 PA Ohio North ftUS ft feet rods chains links m mile FNL FSL FEL FWL F L line lines '
  + 'from fr of the and & , ; : ( ) - / . + of Lat Long NAD 27 83 NAD83 WGS84 6th PM Willamette Meridian X Y Easting Northing E1912345 six hundred sixty thousand County State Plane Zone'
).split(' ');

/** Words of the grammar in no order at all. */
export function soup(random: Random): string {
  return Array.from({ length: 1 + random.integer(14) }, () => pick(random, SOUP) + (random.uniform() < 0.8 ? ' ' : '')).join('');
}
