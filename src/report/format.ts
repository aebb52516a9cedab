import type { Crs } from '../geodesy/types.js';

/** A space at which a line does not break. */
export const NBSP = '\u00a0';
/** A space between thousands that does not break either. */
const THIN = '\u202f';
const MINUS = '\u2212';
/** What stands in a table where there is no value. */
export const NONE = '\u2013';

/** A number with so many decimals, thousands apart, with a true minus; a dash for NaN. */
export function number(value: number, decimals = 0): string {
  if (!Number.isFinite(value)) return NONE;
  const [whole = '', fraction] = Math.abs(value).toFixed(decimals).split('.');
  const text = whole.replace(/\B(?=(\d{3})+$)/g, THIN) + (fraction ? `.${fraction}` : '');
  return value < 0 && Number(value.toFixed(decimals)) !== 0 ? MINUS + text : text;
}

/** A chance in a table, to a tenth of a per cent; a chance that is not quite certain never reads as certain. */
export function chanceCell(p: number): string {
  if (!Number.isFinite(p)) return NONE;
  if (p === 0) return `0${NBSP}%`;
  if (p < 0.001) return `<${NBSP}0.1${NBSP}%`;
  if (p > 0.999) return `>${NBSP}99.9${NBSP}%`;
  return `${(100 * p).toFixed(1)}${NBSP}%`;
}

/** A chance in a sentence, to a whole per cent. */
export function chanceWords(p: number): string {
  if (!Number.isFinite(p)) return 'an unknown chance';
  if (p === 0) return `0${NBSP}%`;
  if (p < 0.01) return `less than 1${NBSP}%`;
  if (p > 0.99) return `more than 99${NBSP}%`;
  return `${Math.round(100 * p)}${NBSP}%`;
}

export interface LengthUnit {
  /** As written after a number. */
  readonly symbol: string;
  readonly words: string;
  readonly metres: number;
  /** Decimals that a position in it is given with: about a centimetre. */
  readonly decimals: number;
}

/** The unit of the survey's own coordinates. */
export function frameUnit(frame: Crs): LengthUnit {
  if (frame.unit === 'metre') return { symbol: 'm', words: 'metres', metres: 1, decimals: 2 };
  return frame.unit === 'foot'
    ? { symbol: 'ft', words: 'international feet', metres: frame.metresPerUnit, decimals: 2 }
    : { symbol: 'ftUS', words: 'US survey feet', metres: frame.metresPerUnit, decimals: 2 };
}

/** A length on the ground, in metres and, where the frame is in feet, in feet too. */
export function length(metres: number, unit: LengthUnit, decimals = 1): string {
  if (!Number.isFinite(metres)) return NONE;
  const text = `${number(metres, decimals)}${NBSP}m`;
  if (unit.metres === 1) return text;
  const feet = metres / unit.metres;
  return `${text} (${number(feet, feet < 10 ? 1 : 0)}${NBSP}ft)`;
}

const WINDS = ['north', 'north-east', 'east', 'south-east', 'south', 'south-west', 'west', 'north-west'] as const;

/** An azimuth in words, by eighths. */
export function compass(azimDeg: number): string {
  return WINDS[Math.round((((azimDeg % 360) + 360) % 360) / 45) % 8]!;
}

/** `1 record`, `3 records`. */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${number(count)}${NBSP}${count === 1 ? one : many}`;
}

/** `a`, `a and b`, `a, b and c`. */
export function listed(words: readonly string[], last: 'and' | 'or' = 'and'): string {
  return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} ${last} ${words.at(-1)}`;
}

export function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** Makes a sentence of somebody else's words: a capital, unless it begins with a name of a file or column, and one full stop. */
export function sentence(text: string): string {
  const trimmed = text.trim();
  const begun = /^[a-z][a-z-]*(?:[ ,;]|$)/.test(trimmed) ? capital(trimmed) : trimmed;
  return /[.!?]$/.test(begun) || begun === '' ? begun : `${begun}.`;
}
