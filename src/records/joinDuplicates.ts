import { drawnEllipse } from '../density/drawnEllipse.js';
import type { Covariance, Density, DensityPart, GaussianPart } from '../density/types.js';
import { agreement } from './agreement.js';
import type { RawRecord } from './rawRecord.js';
import { metres } from './sourceError.js';
import type { Disagreement, JoinedRow, WellRecord } from './types.js';

export interface JoinResult {
  readonly placed: readonly WellRecord[];
  readonly joined: readonly JoinedRow[];
  readonly disagreements: readonly Disagreement[];
}

interface JoinOptions {
  readonly disagreeBelow: number;
  readonly shareOf: (record: WellRecord) => number;
}

/** Digits of an API number that are the same for every hole and event of a well. */
const WELL_DIGITS = 10;

/** Of two places that are as good the first row's is kept; digits and projection change an error by less than this. */
const CLEARLY_BETTER = 0.99;

/** Attributes that so many wells share (`unknown 1`) tell none of them apart, and are looked at no more. */
const MOST_NAMESAKES = 20;

/**
 * Joins rows that tell of one well: those with the same API number, wherever they lie, and those without two different
 * numbers whose places agree by their errors and whose attributes (well number with name or operator) are the same. The
 * better place is kept; two that are independent are weighted by their inverse covariances. Where places of one number
 * disagree, that is a finding, and the other place keeps its share of the chance.
 */
export function joinDuplicates(placed: readonly WellRecord[], raws: readonly RawRecord[], options: JoinOptions): JoinResult {
  const joined: JoinedRow[] = [];
  const disagreements: Disagreement[] = [];
  const kept: Array<{ record: WellRecord; api: string | null }> = [];
  const byKey = new Map<string, number[]>();
  for (const [i, record] of placed.entries()) {
    const raw = raws[i]!;
    const api = apiOf(record);
    const keys = [...(api === null ? [] : [`api ${api}`]), ...attributeKeys(raw)];
    const at = partnerOf(record, api, { keys, byKey, kept, options });
    if (at === null) {
      for (const key of keys) enter(byKey, key, kept.length);
      kept.push({ record, api });
      continue;
    }
    const { record: partner, api: partnerApi } = kept[at]!;
    const how = agreement(asPlace(partner), asPlace(record));
    const apart = how.p < options.disagreeBelow;
    const [better, worse] = record.posSdM < CLEARLY_BETTER * partner.posSdM ? [record, partner] : [partner, record];
    const result = apart ? split(better, worse, options) : combine(better, worse, options);
    // The first row's id stays, so that joining further files renames nobody.
    kept[at] = { record: named(result, partner, record, apart ? how.distanceM : null), api: partnerApi ?? api };
    for (const key of keys) enter(byKey, key, at);
    const why = api !== null && partnerApi === api ? `the same API number ${partner.apiNumber!}` : 'places and attributes that agree';
    joined.push({ recordId: record.recordId, source: record.source, row: record.row, into: partner.recordId, why, distanceM: how.distanceM });
    if (apart) {
      disagreements.push({
        recordId: partner.recordId, source: better.source, row: better.row, kept: `${better.source}, row ${better.row}: ${better.basis}`, other: `${worse.source}, row ${worse.row}: ${worse.basis}`,
        ...how, otherShare: shareLeft(better, worse, options),
      });
    }
  }
  return { placed: joined.length === 0 ? placed : kept.map(({ record }) => record), joined, disagreements };
}

function enter(byKey: Map<string, number[]>, key: string, at: number): void {
  const list = byKey.get(key);
  if (!list) byKey.set(key, [at]);
  else if (list.length < MOST_NAMESAKES && !list.includes(at)) list.push(at);
}

function apiOf(record: WellRecord): string | null {
  return record.apiNumber?.replace(/\D/g, '').slice(0, WELL_DIGITS) ?? null;
}

function partnerOf(record: WellRecord, api: string | null, { keys, byKey, kept, options }: {
  readonly keys: readonly string[]; readonly byKey: ReadonlyMap<string, readonly number[]>; readonly kept: ReadonlyArray<{ readonly record: WellRecord; readonly api: string | null }>; readonly options: JoinOptions;
}): number | null {
  for (const key of keys) {
    for (const at of byKey.get(key) ?? []) {
      if (key.startsWith('api ')) return at;
      const { record: other, api: otherApi } = kept[at]!;
      const numbers = api !== null && otherApi !== null && otherApi !== api;
      if (!numbers && agreement(asPlace(other), asPlace(record)).p >= options.disagreeBelow) return at;
    }
  }
  return null;
}

/** What two rows of one well have in common: the well's number with its name, with its operator, or a name that holds a number. */
function attributeKeys({ name, operator, wellNumber }: RawRecord): string[] {
  const [n, o, w] = [plain(name), plain(operator), plain(wellNumber).replace(/^(?:no|nr|number)/, '').replace(/^0+(?=\d)/, '')];
  if (w !== '') return [...(n === '' ? [] : [`name ${n} ${w}`]), ...(o === '' || n !== '' ? [] : [`operator ${o} ${w}`])];
  return /\d/.test(n) ? [`name ${n} ${o}`] : [];
}

function plain(text: string): string {
  return text.toLowerCase().replace(/&/g, 'and').replace(/[^\p{L}\p{N}]+/gu, '');
}

function asPlace({ x, y, density }: WellRecord): { x: number; y: number; parts: DensityPart[] } {
  return { x, y, parts: density.parts.filter(({ role }) => role === 'place') };
}

/** Two places that agree: weighted where they are independent, else the better one. */
function combine(better: WellRecord, worse: WellRecord, options: JoinOptions): WellRecord {
  const [a, b] = [onlyGaussian(better), onlyGaussian(worse)];
  if (!a || !b || !independent(better, worse)) return better;
  const share = Math.min(options.shareOf(better), options.shareOf(worse));
  const { x, y, cov } = weighted(a, b);
  const blunders = better.density.parts.filter(({ role }) => role === 'blunder');
  const spread = blunders.reduce((sum, part) => sum + part.weight, 0);
  const density: Density = {
    parts: [
      { role: 'place', kind: 'gaussian', weight: 1 - share, x, y, cov },
      ...(spread > 0 ? blunders.map((part) => ({ ...part, weight: (part.weight * share) / spread })) : []),
    ],
  };
  const { ellipse: { semiMajM, semiMinM, azimDeg }, excess } = drawnEllipse(density);
  return {
    ...better, x, y, density, semiMajM, semiMinM, azimDeg, excess, posSdM: Math.sqrt((cov[0] + cov[2]) / 2),
    basis: `weighted by their errors: ${better.basis} (${better.source}, row ${better.row}) and ${worse.basis} (${worse.source}, row ${worse.row})`,
  };
}

function onlyGaussian({ density }: WellRecord): GaussianPart | null {
  const parts = density.parts.filter(({ role }) => role === 'place');
  return parts.length === 1 && parts[0]!.kind === 'gaussian' && density.parts.every((part) => part.role === 'place' || part.kind !== 'gaussian') ? parts[0]! : null;
}

/** Errors are taken for independent only between files, without a group's common shift, and not both from the lines of one section layer. */
function independent(a: WellRecord, b: WellRecord): boolean {
  const fromLayer = (record: WellRecord): boolean => record.shift.includes('section layer');
  return a.source !== b.source && a.group === null && b.group === null && !(fromLayer(a) && fromLayer(b));
}

/** Mean of two places weighted by their inverse covariances. */
function weighted(a: GaussianPart, b: GaussianPart): { x: number; y: number; cov: Covariance } {
  const [p, q] = [inverse(a.cov), inverse(b.cov)];
  const cov = inverse([p[0] + q[0], p[1] + q[1], p[2] + q[2]]);
  const [dx, dy] = [b.x - a.x, b.y - a.y];
  const [u, v] = [q[0] * dx + q[1] * dy, q[1] * dx + q[2] * dy];
  return { x: a.x + cov[0] * u + cov[1] * v, y: a.y + cov[1] * u + cov[2] * v, cov };
}

function inverse([ee, en, nn]: Covariance): Covariance {
  const det = ee * nn - en * en;
  return [nn / det, -en / det, ee / det];
}

/** Chance that the worse place is right where the two contradict each other: one of them is a blunder. */
function shareLeft(better: WellRecord, worse: WellRecord, { shareOf }: JoinOptions): number {
  const [b, w] = [shareOf(better), shareOf(worse)];
  const [right, wrong] = [(1 - b) * w, (1 - w) * b];
  return right + wrong > 0 ? wrong / (right + wrong) : 0.5;
}

/** Two places of one well that disagree: the better one with the other as what it may be instead. */
function split(better: WellRecord, worse: WellRecord, options: JoinOptions): WellRecord {
  const share = shareLeft(better, worse, options);
  const others = worse.density.parts.map((part) => ({ ...part, role: 'blunder' as const, weight: part.weight * share }));
  // Nobody knows which of them would move with its group.
  return { ...better, group: null, density: { parts: [...better.density.parts.map((part) => ({ ...part, weight: part.weight * (1 - share) })), ...others] } };
}

function named(result: WellRecord, first: WellRecord, added: WellRecord, apartM: number | null): WellRecord {
  const rows = [...(first.joined ?? [`${first.source}, row ${first.row}`]), `${added.source}, row ${added.row}`];
  const note = [first.note, added.note, `joined from ${rows.join(' and ')}`, ...(apartM === null ? [] : [`these disagree, ${metres(apartM)} apart`])];
  const apiNumber = first.apiNumber ?? added.apiNumber;
  return { ...result, recordId: first.recordId, source: first.source, row: first.row, joined: rows, note: [...new Set(note)].filter((text) => text !== '').join('; '), ...(apiNumber === undefined ? {} : { apiNumber }) };
}
