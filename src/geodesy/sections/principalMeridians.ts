/**
 * Codes of the principal meridians as they stand in a PLSSID, with their usual names in lower case.
 * Source: FGDC Cadastral Subcommittee, PLSS CadNSDI Standard Domains of Values (2015); the rarer ones from memory.
 */
const NAMES: Readonly<Record<string, readonly string[]>> = {
  '01': ['first'], '02': ['second'], '03': ['third'], '04': ['fourth'], '05': ['fifth'], '06': ['sixth'],
  '07': ['black hills'], '08': ['boise'], '09': ['chickasaw'], '10': ['choctaw'], '11': ['cimarron'], '12': ['copper river'],
  '13': ['fairbanks'], '14': ['gila and salt river', 'gila & salt river'], '15': ['humboldt'], '16': ['huntsville'], '17': ['indian'],
  '18': ['louisiana'], '19': ['michigan'], '20': ['montana', 'principal'], '21': ['mount diablo', 'mt diablo'], '22': ['navajo'],
  '23': ['new mexico'], '24': ['st helena', 'saint helena'], '25': ['st stephens', 'saint stephens'], '26': ['salt lake'],
  '27': ['san bernardino'], '28': ['seward'], '29': ['tallahassee'], '30': ['uintah', 'uinta'], '31': ['ute'], '32': ['washington'],
  '33': ['willamette'], '34': ['wind river'], '44': ['kateel river'], '45': ['umiat'], '46': ['fourth extended'],
};
const ORDINALS: Readonly<Record<string, string>> = { '1st': 'first', '2nd': 'second', '3rd': 'third', '4th': 'fourth', '5th': 'fifth', '6th': 'sixth' };

/**
 * Code of a principal meridian: of a code itself (`33`, `6`), of a name with or without `meridian`, `principal` or `P.M.`
 * (`Willamette`, `6th P.M.`). Null for one that is not known.
 */
export function meridianCode(text: string): string | null {
  const words = text.toLowerCase().replace(/p\.?\s*m\.?\s*$/, '').replace(/[.,]/g, '').replace(/\bmeridian\b/, '').replace(/\s+/g, ' ').trim();
  if (/^\d{1,2}$/.test(words)) return words.padStart(2, '0');
  const spelled = words.replace(/^\d\w\w\b/, (ordinal) => ORDINALS[ordinal] ?? ordinal);
  const candidates = [spelled, spelled.replace(/\bprincipal\b/, '').replace(/\s+/g, ' ').trim()];
  for (const name of candidates) {
    for (const [code, names] of Object.entries(NAMES)) if (names.includes(name)) return code;
  }
  return null;
}

/** First of the usual names of a code, null for one that is not known. */
export function meridianName(code: string): string | null {
  const name = NAMES[code]?.[0];
  return name ? name.replace(/(^| )(?!and )[a-z]/g, (letter) => letter.toUpperCase()) : null;
}
