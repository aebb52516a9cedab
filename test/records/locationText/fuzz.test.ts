import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { Random } from '../../../src/numerics/random.js';
import { formatLocation } from '../../../src/records/locationText/formatLocation.js';
import { parseLocation } from '../../../src/records/locationText/parseLocation.js';
import type { LocationStatement, SingleStatement } from '../../../src/records/locationText/types.js';
import { US_SURVEY_FOOT_M } from '../../../src/units.js';
import { make, mutate, soup } from './generate.js';
import { difference } from './statements.js';

/** 20,000 texts by default; IRONPLAT_FUZZ sets another number. */
const COUNT = Number(process.env['IRONPLAT_FUZZ'] ?? 20_000);
const MILE_M = 5280 * US_SURVEY_FOOT_M * (1 + 1e-9);

describe(`location texts made by a grammar (${COUNT}, IRONPLAT_FUZZ sets the number)`, () => {
  it('are read as they were made, and read again as they are formatted', () => {
    const random = new Random(20_261);
    const wrong: string[] = [];
    for (let i = 0; i < COUNT; i++) {
      const { text, statement } = make(random);
      const fault = faultOf(() => difference(parseLocation(text, 'made'), statement) ?? roundTrip(statement));
      if (fault !== null) wrong.push(`${text}: ${fault}`);
    }
    expect(wrong.slice(0, 20)).toEqual([]);
  });

  it('are refused by UserError alone where slips spoil them; what is still read holds what every statement holds', () => {
    const random = new Random(20_262);
    const wrong: string[] = [];
    let read = 0;
    for (let i = 0; i < COUNT; i++) {
      const text = mutate(random, make(random).text, make(random).text);
      let statement: LocationStatement;
      try {
        statement = parseLocation(text, 'made');
      } catch (error) {
        if (!(error instanceof UserError) || error.code !== 'position_invalid' || !error.message.startsWith('made: ')) wrong.push(`${JSON.stringify(text)}: ${String(error)}`);
        continue;
      }
      read++;
      const fault = faultOf(() => impossible(statement) ?? roundTrip(statement));
      if (fault !== null) wrong.push(`${JSON.stringify(text)}: ${fault}`);
    }
    expect(wrong.slice(0, 20)).toEqual([]);
    // Slips that spoil every text, or none, would test nothing.
    expect(read / COUNT).toBeGreaterThan(0.05);
    expect(read / COUNT).toBeLessThan(0.6);
  });

  it('are refused by UserError alone where their words stand in no order', () => {
    const random = new Random(20_263);
    const wrong: string[] = [];
    for (let i = 0; i < COUNT; i++) {
      const text = soup(random);
      let statement: LocationStatement;
      try {
        statement = parseLocation(text, 'made');
      } catch (error) {
        if (!(error instanceof UserError) || error.code !== 'position_invalid') wrong.push(`${JSON.stringify(text)}: ${String(error)}`);
        continue;
      }
      const fault = faultOf(() => impossible(statement) ?? roundTrip(statement));
      if (fault !== null) wrong.push(`${JSON.stringify(text)}: ${fault}`);
    }
    expect(wrong.slice(0, 20)).toEqual([]);
  });
});

function faultOf(look: () => string | null): string | null {
  try {
    return look();
  } catch (error) {
    return String(error);
  }
}

function roundTrip(statement: LocationStatement): string | null {
  const text = formatLocation(statement);
  const found = difference(parseLocation(text, 'formatted'), statement);
  return found === null ? null : `formatted ${JSON.stringify(text)}${found}`;
}

function impossible(statement: LocationStatement): string | null {
  const parts: readonly SingleStatement[] = statement.kind === 'combined' ? statement.parts : [statement];
  for (const each of parts) {
    if (each.kind === 'geographic' || each.kind === 'mapCorner') {
      if (!(Math.abs(each.latDeg) <= 90 && Math.abs(each.lonDeg) <= 180)) return `no place on Earth: ${JSON.stringify(each)}`;
    } else if (each.kind === 'projected') {
      if (!Number.isFinite(each.easting) || !Number.isFinite(each.northing)) return 'no finite coordinates';
    } else {
      const { reference, footage, tie } = each;
      if (reference.section !== undefined && !(reference.section >= 1 && reference.section <= 36)) return `section ${reference.section}`;
      for (const { distanceM } of [...(footage?.calls ?? []), ...(tie?.offsets ?? [])]) if (!(distanceM >= 0 && distanceM <= MILE_M)) return `a call of ${distanceM} m leads out of its section`;
      const sides = footage?.calls.map((call) => ('NS'.includes(call.from) ? 'NS' : 'EW')) ?? ['NS', 'EW'];
      if (sides[0] === sides[1]) return 'two calls from parallel lines';
    }
  }
  return null;
}
