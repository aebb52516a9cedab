/** A node of well-known text: `KEYWORD["text", 1.5, CHILD[...]]`. Words that stand alone (axis directions) are texts. */
export interface WktNode {
  /** Upper case. */
  readonly keyword: string;
  readonly values: readonly (string | number)[];
  readonly children: readonly WktNode[];
}

const TOKEN = /\s*(?:"((?:[^"]|"")*)"|([[\](),])|([^[\](),"\s]+))/y;

/** Parses WKT 1 or 2 with either bracket; null where the text is none. Source: ISO 19162, OGC 01-009. */
export function parseWkt(text: string): WktNode | null {
  const tokens: { quoted?: string; mark?: string; word?: string }[] = [];
  const trimmed = text.replace(/^\uFEFF/, '').replace(/\0/g, '').trim();
  TOKEN.lastIndex = 0;
  while (TOKEN.lastIndex < trimmed.length) {
    const match = TOKEN.exec(trimmed);
    if (match === null) return null;
    tokens.push({ quoted: match[1]?.replaceAll('""', '"'), mark: match[2], word: match[3] });
  }
  let at = 0;
  const node = (): WktNode | null => {
    const keyword = tokens[at]?.word;
    const open = tokens[at + 1]?.mark;
    if (keyword === undefined || (open !== '[' && open !== '(')) return null;
    at += 2;
    const values: (string | number)[] = [];
    const children: WktNode[] = [];
    for (;;) {
      const token = tokens[at];
      const follower = tokens[at + 1]?.mark;
      if (token === undefined) return null;
      if (token.word !== undefined && (follower === '[' || follower === '(')) {
        const child = node();
        if (child === null) return null;
        children.push(child);
      } else {
        if (token.mark !== undefined) return null;
        values.push(token.quoted ?? (Number.isFinite(Number(token.word)) ? Number(token.word) : token.word!));
        at++;
      }
      const end = tokens[at++]?.mark;
      if (end === ']' || end === ')') return { keyword: keyword.toUpperCase(), values, children };
      if (end !== ',') return null;
    }
  };
  const root = node();
  return root !== null && at === tokens.length ? root : null;
}

/** The first child with one of the keywords. */
export function child(node: WktNode | undefined, ...keywords: string[]): WktNode | undefined {
  return node?.children.find(({ keyword }) => keywords.includes(keyword));
}

/** Letters and digits alone, lower case: how names of methods, parameters and datums are compared. */
export function plainName(name: unknown): string {
  return String(name).toLowerCase().replace(/[^a-z0-9]/g, '');
}
