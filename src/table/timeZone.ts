import { DAY_S, daysFromCivil } from './calendar.js';

/** Zones change at whole quarters of an hour, so one look-up serves a quarter. */
const QUARTER_S = 900;

/** What a local clock reading means: one offset, or none (skipped in spring), or two (repeated in autumn). */
export type LocalOffset = { readonly kind: 'one'; readonly offsetS: number } | { readonly kind: 'skipped' } | { readonly kind: 'repeated' };

/** Offset east of Greenwich of a local clock reading, seconds since 1970 as if it were UTC. */
export type ZoneRule = (localS: number) => LocalOffset;

/**
 * Reads a stated zone: `UTC`, `Z`, a fixed offset such as `+05:30` or `-0500`, or a name of the IANA time zone database
 * (`America/New_York`), which the runtime's Intl knows. Null where it is none of these.
 */
export function parseZone(zone: string): ZoneRule | null {
  const fixed = fixedOffset(zone.trim());
  if (fixed !== null) {
    const rule: LocalOffset = { kind: 'one', offsetS: fixed };
    return () => rule;
  }
  return zone.includes('/') ? namedZone(zone.trim()) : null;
}

function fixedOffset(zone: string): number | null {
  if (zone === 'UTC' || zone === 'Z' || zone === 'GMT') return 0;
  const match = /^(?:UTC|GMT)?([+-])(\d{2}):?(\d{2})?$/.exec(zone);
  if (!match) return null;
  const hours = Number(match[2]);
  const minutes = Number(match[3] ?? 0);
  if (hours > 14 || minutes > 59) return null;
  return (match[1] === '-' ? -1 : 1) * (hours * 3600 + minutes * 60);
}

function namedZone(zone: string): ZoneRule | null {
  let format: Intl.DateTimeFormat;
  try {
    format = new Intl.DateTimeFormat('en-US', {
      timeZone: zone, hourCycle: 'h23', year: 'numeric', month: 'numeric', day: 'numeric', hour: 'numeric', minute: 'numeric', second: 'numeric',
    });
  } catch (error) {
    if (error instanceof RangeError) return null;
    throw error;
  }
  const offsetAt = (utcS: number): number => {
    const parts = new Map(format.formatToParts(utcS * 1000).map(part => [part.type, Number(part.value)]));
    const at = (type: Intl.DateTimeFormatPartTypes): number => parts.get(type)!;
    return daysFromCivil(at('year'), at('month'), at('day')) * DAY_S + at('hour') * 3600 + at('minute') * 60 + at('second') - utcS;
  };
  const known = new Map<number, LocalOffset>();
  return localS => {
    const quarter = Math.floor(localS / QUARTER_S) * QUARTER_S;
    let rule = known.get(quarter);
    if (rule === undefined) known.set(quarter, (rule = localOffset(quarter, offsetAt)));
    return rule;
  };
}

/** The offsets a day before and after are the only candidates; one that leads back to the same local reading holds. */
function localOffset(localS: number, offsetAt: (utcS: number) => number): LocalOffset {
  const candidates = new Set([offsetAt(localS - DAY_S), offsetAt(localS + DAY_S)]);
  const holding = [...candidates].filter(offset => offsetAt(localS - offset) === offset);
  if (holding.length === 1) return { kind: 'one', offsetS: holding[0]! };
  return { kind: holding.length === 0 ? 'skipped' : 'repeated' };
}
