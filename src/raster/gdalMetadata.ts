import type { GridStatistics } from './gridStatistics.js';

export interface BandMetadata {
  readonly description: string;
  /** Unit of the values, such as `nT`; empty where they have none. */
  readonly unit: string;
  readonly scale: number;
  readonly offset: number;
  /** Of the numbers as stored, before scale and offset. */
  readonly statistics: GridStatistics | null;
}

/**
 * The text of the GDAL_METADATA tag for one band.
 * Source: GDAL documentation, GTiff driver, metadata: items with `sample` and `role`.
 */
export function gdalMetadata(band: BandMetadata): string {
  const items: string[] = [];
  const item = (name: string, value: string, role = ''): void => {
    items.push(`  <Item name="${name}" sample="0"${role && ` role="${role}"`}>${escapeItem(value)}</Item>\n`);
  };
  if (band.statistics) {
    const { minimum, maximum, mean, standardDeviation, validPercent } = band.statistics;
    item('STATISTICS_MAXIMUM', String(maximum));
    item('STATISTICS_MEAN', String(mean));
    item('STATISTICS_MINIMUM', String(minimum));
    item('STATISTICS_STDDEV', String(standardDeviation));
    item('STATISTICS_VALID_PERCENT', String(Math.round(validPercent * 100) / 100));
  }
  if (band.description) item('DESCRIPTION', band.description, 'description');
  if (band.unit) item('UNITTYPE', band.unit, 'unittype');
  if (band.scale !== 1 || band.offset !== 0) {
    item('OFFSET', String(band.offset), 'offset');
    item('SCALE', String(band.scale), 'scale');
  }
  return items.length > 0 ? `<GDALMetadata>\n${items.join('')}</GDALMetadata>\n` : '';
}

/** GDAL escapes the text of an item before it makes an XML element of it, and reads it the same way: twice. */
function escapeItem(text: string): string {
  return escapeXml(escapeXml(text));
}

/** What an item says, from its text as it stands in the XML; one that was escaped only once reads the same but for an ampersand. */
export function readItem(text: string): string {
  return unescapeXml(unescapeXml(text));
}

/** Text for an XML document: marks escaped, and characters that XML 1.0 has no place for left out. */
export function escapeXml(text: string): string {
  // oxlint-disable-next-line no-control-regex -- the control characters are the ones to leave out
  return text.replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g, '')
    .replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}

const ENTITIES: Readonly<Record<string, string>> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: "'" };

/** Text of an XML document as it was meant, the five named entities and numbered characters resolved. */
function unescapeXml(text: string): string {
  return text.replace(/&(?:#x([0-9a-f]+)|#(\d+)|(\w+));/gi, (whole, hex?: string, decimal?: string, name?: string) => {
    if (name !== undefined) return ENTITIES[name] ?? whole;
    const code = hex === undefined ? Number(decimal) : Number.parseInt(hex, 16);
    return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
  });
}
