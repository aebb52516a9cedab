import type { Cursor } from './cursor.js';
import { stateCode, zoneOf } from './statePlaneZones.js';
import type { ProjectedSystem } from './types.js';
import { sideOf } from './words.js';

const PARTS: Readonly<Record<string, string>> = {
  N: 'N', NORTH: 'N', NORTHERN: 'N', S: 'S', SOUTH: 'S', SOUTHERN: 'S', E: 'E', EAST: 'E', EASTERN: 'E', W: 'W', WEST: 'W', WESTERN: 'W',
  C: 'C', CENTRAL: 'C', NC: 'NC', SC: 'SC', EC: 'EC', WC: 'WC', OFFSHORE: 'O', MAINLAND: 'M', ISLAND: 'I',
};

/**
 * A State Plane zone by the names of state and zone. Two-letter codes of states count only where the text says State Plane
 * or spells the zone's part out, since IN, OR and ME are words too.
 */
export function stateZoneAhead(cursor: Cursor, said: boolean): { system: ProjectedSystem; count: number } | null {
  const [one, two] = [cursor.peek(), cursor.peek(1)];
  if (one.kind !== 'word') return null;
  const double = two.kind === 'word' ? stateCode(`${one.text} ${two.text}`) : null;
  const state = double ?? stateCode(one.text);
  if (state === null) return null;
  const spelled = double !== null || one.text.length > 2;
  let at = double === null ? 1 : 2;
  const hyphened = cursor.isMark('-', at);
  if (hyphened || cursor.isMark(',', at)) at++;
  const zoneWord = cursor.peek(at).text === 'ZONE' ? 1 : 0;
  const part = partAhead(cursor, at + zoneWord);
  if (part !== null && (said || spelled || part.spelled) && (hyphened || !isLabelOf(cursor, part, at + zoneWord + part.count))) {
    const zone = zoneOf(state, part.part);
    if (zone !== null) {
      const after = cursor.peek(at + zoneWord + part.count).text === 'ZONE' ? 1 : 0;
      return { system: { kind: 'State Plane', ...zone }, count: at + zoneWord + part.count + after };
    }
  }
  const alone = said || zoneWord === 1 ? zoneOf(state, '') : null;
  return alone === null ? null : { system: { kind: 'State Plane', ...alone }, count: (double === null ? 1 : 2) + zoneWord };
}

/** `Ohio N 345678`: the side belongs to the number behind it, unless that has a side of its own behind it. */
function isLabelOf(cursor: Cursor, { part }: { readonly part: string }, ahead: number): boolean {
  if ((part !== 'N' && part !== 'E') || !cursor.isNumber(ahead)) return false;
  const behind = cursor.peek(ahead + 1);
  return behind.kind !== 'word' || sideOf(behind.text) === null || cursor.isNumber(ahead + 2);
}

/** The part of a state that a zone is named for: `South`, `S`, `North Central`, `4`. */
function partAhead(cursor: Cursor, ahead: number): { part: string; count: number; spelled: boolean } | null {
  const token = cursor.peek(ahead);
  if (token.kind === 'number') return /^\d{1,2}$/.test(token.text) && !cursor.isNumber(ahead + 1) ? { part: token.text, count: 1, spelled: false } : null;
  if (token.kind !== 'word') return null;
  if (token.text === 'LONG' && cursor.peek(ahead + 1).text === 'ISLAND') return { part: 'L', count: 2, spelled: true };
  if (!Object.hasOwn(PARTS, token.text)) return null;
  const part = PARTS[token.text]!;
  const next = cursor.peek(ahead + 1);
  if (next.kind === 'word' && next.text === 'CENTRAL' && 'NSEW'.includes(part)) return { part: `${part}C`, count: 2, spelled: true };
  return { part, count: 1, spelled: token.text.length > 2 };
}
