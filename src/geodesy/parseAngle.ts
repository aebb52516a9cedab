import { UserError } from '../errors.js';
import { angleFromParts, packedParts } from './angleParts.js';

export type Axis = 'longitude' | 'latitude';

/** Degrees, and the size in degrees of the last digit that was written. */
export interface ParsedAngle {
  readonly deg: number;
  readonly resolutionDeg: number;
}

/** Spellings that a column has to be known for, since elsewhere they mean something else. */
export interface AngleSpelling {
  /** Digits that run together are degrees, minutes and seconds: `392230.5`, `0801500`. */
  readonly packed: boolean;
  /** A comma is the decimal point: `39,3750`. */
  readonly decimalComma: boolean;
}

export const ANGLE_SPELLING_DEFAULTS: AngleSpelling = Object.freeze({ packed: false, decimalComma: false });

const LETTERS: Readonly<Record<Axis, string>> = { longitude: 'EW', latitude: 'NS' };

const HEMISPHERE = '(?:n(?:orth)?|s(?:outh)?|e(?:ast)?|w(?:est)?)\\.?';
const WHOLE = new RegExp(`^(?<before>${HEMISPHERE})?\\s*(?<sign>[-+])?\\s*(?<body>[\\d.].*?)\\s*(?<after>${HEMISPHERE})?$`, 'i');
/**
 * Up to three numbers. Between them stand the marks of degrees, minutes and seconds, a colon, a hyphen or a space;
 * a mark has to stand after the part it belongs to.
 */
const BODY = /^(?<d>\d*\.?\d+|\d+\.)\s*(?:(?:°|d(?:eg)?\.?|[:\s-])\s*(?:(?<m>\d*\.?\d+|\d+\.)\s*(?:(?:'|m(?:in)?\.?|[:\s-])\s*(?:(?<s>\d*\.?\d+|\d+\.)\s*(?:"|''|s(?:ec)?\.?)?)?)?)?)?$/i;

/**
 * Reads one angle as people write it: decimal degrees, degrees and minutes, or degrees, minutes and seconds; with a sign
 * or a hemisphere letter (before or after), with °, ′, ″ and their look-alikes, d m s, colons, hyphens or spaces between.
 * `40°26'46"` has a resolution of 1/3600, `39.3000` of 0.0001. A longitude without sign or letter counts as east: nothing
 * is repaired here. Packed digits and decimal commas are read only where `spelling` says so. Throws UserError
 * `position_invalid` where the text is ambiguous, unreadable or out of range.
 */
export function parseAngle(text: string, axis: Axis, where: string, spelling: Partial<AngleSpelling> = {}): ParsedAngle {
  const { packed, decimalComma } = { ...ANGLE_SPELLING_DEFAULTS, ...spelling };
  const refuse = (wanted: string, advice?: string): UserError =>
    new UserError({ code: 'position_invalid', where, found: JSON.stringify(text), wanted, ...(advice ? { advice } : {}) });

  const plain = decimalComma ? plainMarks(text).replace(/(\d),(\d)/g, '$1.$2') : plainMarks(text);
  if (AMBIGUOUS_S.test(plain)) throw refuse('S for south or s for seconds, not one that can be read as either', `write it as in ${EXAMPLES[axis]}`);
  // A closing s after "m" is the mark of the seconds, so the text is tried without a hemisphere letter behind it first.
  const whole = (MARKED_PARTS.exec(plain) ?? WHOLE.exec(plain))?.groups;
  const body = whole ? BODY.exec(whole['body']!)?.groups : undefined;
  if (!whole || !body) throw refuse(`a ${axis} as in ${EXAMPLES[axis]}`);

  const letters = [whole['before'], whole['after']].filter((word) => word !== undefined).map((word) => word[0]!.toUpperCase());
  if (letters.length > 1) throw refuse('one hemisphere letter', `it has ${letters.join(' and ')}`);
  const letter = letters[0];
  if (letter !== undefined && !LETTERS[axis].includes(letter)) {
    throw refuse(`a ${axis}, with ${LETTERS[axis].split('').join(' or ')}`, 'longitude and latitude may be in each other\'s column');
  }
  if (letter !== undefined && whole['sign'] === '-') throw refuse('a sign or a hemisphere letter', `a minus sign and ${letter} together can be read two ways`);

  const parts = [body['d'], body['m'], body['s']].filter((part) => part !== undefined);
  const runTogether = packed && parts.length === 1 ? packedParts(parts[0]!, axis) : null;
  const angle = angleFromParts(runTogether ?? parts, axis);
  if ('wanted' in angle) {
    const tooLarge = angle.part === 0 && parts.length === 1 && !packed;
    throw refuse(angle.wanted, tooLarge ? 'digits run together, as in 401530, are not taken for degrees, minutes and seconds' : undefined);
  }
  const negative = whole['sign'] === '-' || letter === 'S' || letter === 'W';
  return { deg: negative && angle.deg !== 0 ? -angle.deg : angle.deg, resolutionDeg: angle.resolutionDeg };
}

const EXAMPLES: Readonly<Record<Axis, string>> = {
  longitude: '-80.2000, 80.2000 W or 80°12\'00" W',
  latitude: '39.3000, 39.3000 N or 39°18\'00" N',
};

/** Degrees, minutes and perhaps seconds marked by letters, without a hemisphere behind them: `79d58m56s`, `79d58min`. */
const MARKED_PARTS = new RegExp(`^(?<before>${HEMISPHERE})?\\s*(?<sign>[-+])?\\s*(?<body>[\\d.]+\\s*d(?:eg)?\\.?\\s*[\\d.]+\\s*m(?:in)?\\.?(?:\\s*[\\d.]+s(?:ec)?\\.?)?)$`, 'i');
/** `40 26 46 s` and `40d26m46 S`: south, or seconds? */
const AMBIGUOUS_S = /\d\s*[\s:-]\s*[\d.]+\s*s$|m(?:in)?\.?\s*[\d.]+\s+[sS]$/;

/** One spelling for the many signs that stand for minus, degrees, minutes and seconds. */
function plainMarks(text: string): string {
  return text.trim()
    .replace(/[\u2212\u2010-\u2014\uFE63\uFF0D]/g, '-')
    .replace(/[\u00BA\u02DA\u2218]/g, '°')
    .replace(/[\u2033\u201C\u201D\u02BA\u201F]|\u2032\u2032|\u2019\u2019|''/g, '"')
    .replace(/[\u2032\u2018\u2019\u02B9\u00B4`]/g, "'")
    .replace(/[\u00A0\u2000-\u200A\u202F\u3000\t]/g, ' ');
}
