/**
 * Windows-1252 from 0x80 to 0x9f, with the five unused places left as they are (WHATWG Encoding Standard, index
 * windows-1252). Node 20 decodes that label as Latin-1, which leaves control characters here; where a runtime decodes
 * it rightly, nothing is left to replace.
 */
const UPPER_CONTROLS = '€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ';

/** Bytes in Windows-1252, the encoding of old office exports, to text. Every byte has a letter. */
export function decodeWindows1252(bytes: Uint8Array): string {
  return new TextDecoder('windows-1252').decode(bytes).replace(/[\u0080-\u009f]/g, letter => UPPER_CONTROLS[letter.charCodeAt(0) - 0x80]!);
}
