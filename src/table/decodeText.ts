import { UserError } from '../errors.js';
import { decodeWindows1252 } from './decodeWindows1252.js';

export interface DecodedText {
  readonly text: string;
  readonly notes: readonly string[];
}

/**
 * Bytes of a text file to text: UTF-8 (with or without a byte-order mark) or UTF-16 with its mark. Bytes that are not
 * valid UTF-8 are read as Windows-1252, the encoding of old office exports, and a note says so: such a file has no mark
 * of its own, so the note is the user's chance to see it. Bytes that cannot be text at all are refused.
 */
export function decodeText(bytes: Uint8Array, source: string): DecodedText {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return { text: new TextDecoder('utf-16le').decode(bytes), notes: [] };
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return { text: new TextDecoder('utf-16be').decode(bytes), notes: [] };
  if (bytes[0] === 0x50 && bytes[1] === 0x4b && bytes[2] === 0x03 && bytes[3] === 0x04) {
    throw new UserError({
      code: 'file_unreadable', where: source, found: 'a ZIP archive (perhaps a spreadsheet workbook)', wanted: 'text with separated columns',
      advice: 'export the sheet as CSV (UTF-8)',
    });
  }
  const nul = bytes.indexOf(0);
  if (nul >= 0) {
    throw new UserError({ code: 'file_unreadable', where: source, found: `a zero byte at offset ${nul}`, wanted: 'text in UTF-8' });
  }
  try {
    return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes), notes: [] };
  } catch {
    // The only failure of a fatal decoder is invalid UTF-8.
    return {
      text: decodeWindows1252(bytes),
      notes: [`${source} is not UTF-8; it was read as Windows-1252. Check names with accents, or save it as UTF-8.`],
    };
  }
}
