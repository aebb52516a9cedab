/** Elements that have no end tag. Source: HTML Living Standard, 13.1.2; SVG elements that we write as `<path …/>`. */
const VOID = new Set(['meta', 'br', 'img', 'link', 'input', 'hr']);

export interface Tag {
  readonly name: string;
  readonly attributes: ReadonlyMap<string, string>;
  /** Text up to the next tag, entities resolved. */
  readonly text: string;
}

const TOKEN = /<(\/?)([a-zA-Z][a-zA-Z0-9]*)((?:\s+[a-zA-Z][a-zA-Z0-9-]*="[^"<>]*")*)\s*(\/?)>([^<]*)/y;

/** Reads a document strictly: every tag well formed and closed in its order, else it throws and says where. */
export function readHtml(text: string): Tag[] {
  const doctype = '<!DOCTYPE html>\n';
  if (!text.startsWith(doctype)) throw new Error('no doctype');
  const tags: Tag[] = [];
  const open: string[] = [];
  TOKEN.lastIndex = doctype.length;
  let end = doctype.length;
  for (let match = TOKEN.exec(text); match; match = TOKEN.exec(text)) {
    const [, closing, name, attributes, selfClosed, after] = match as unknown as [string, string, string, string, string, string];
    end = TOKEN.lastIndex;
    if (closing) {
      const last = open.pop();
      if (last !== name) throw new Error(`</${name}> closes <${last ?? 'nothing'}> near …${text.slice(Math.max(0, match.index - 80), match.index + 40)}…`);
      continue;
    }
    if (!selfClosed && !VOID.has(name)) open.push(name);
    const pairs = [...attributes.matchAll(/\s([a-zA-Z0-9-]+)="([^"]*)"/g)].map(([, key, value]) => [key!, unescapeText(value!)] as const);
    if (new Set(pairs.map(([key]) => key)).size !== pairs.length) throw new Error(`<${name}> has an attribute twice`);
    tags.push({ name, attributes: new Map(pairs), text: unescapeText(after) });
  }
  if (end !== text.length) throw new Error(`not well formed near …${text.slice(end, end + 120)}…`);
  if (open.length > 0) throw new Error(`never closed: ${open.join(', ')}`);
  return tags;
}

function unescapeText(text: string): string {
  if (/&(?!(?:amp|lt|gt|quot|#39);)/.test(text)) throw new Error(`a bare ampersand in ${text}`);
  return text.replace(/&lt;/g, '<').replace(/&gt;/g, '>').replace(/&quot;/g, '"').replace(/&#39;/g, "'").replace(/&amp;/g, '&');
}

/** Rows of the first table in a section, as text; the first row is the head. */
export function tableOf(text: string, section: string, index = 0): string[][] {
  const from = text.indexOf(`<section id="${section}"`);
  const tables = text.slice(from, text.indexOf('</section>', from)).split('<table>').slice(1);
  return [...tables[index]!.matchAll(/<tr>(.*?)<\/tr>/gs)].map(([, row]) => [...row!.matchAll(/<t[hd][^>]*>(.*?)<\/t[hd]>/gs)].map(([, cell]) => plain(cell!)));
}

/** Text without markup, spaces made plain. */
export function plain(markup: string): string {
  return unescapeText(markup.replace(/<br>/g, ' ').replace(/<[^>]*>/g, '')).replace(/[\u00a0\u202f]/g, ' ').replace(/\s+/g, ' ').trim();
}
