/** Text that is already markup. Everything else that gets into a document is escaped. */
export class Html {
  constructor(readonly markup: string) {}

  toString(): string {
    return this.markup;
  }
}

/** What may stand in a template: text and numbers are escaped, markup is taken as it is, lists are joined, the rest is nothing. */
export type Content = string | number | Html | null | undefined | false | readonly Content[];

/** Markup from a template: `html`<td>${name}</td>``. No value can break out of its place, neither in text nor in a quoted attribute. */
export function html(parts: TemplateStringsArray, ...values: readonly Content[]): Html {
  return new Html(parts.map((part, i) => part + (i < values.length ? render(values[i]) : '')).join(''));
}

function render(value: Content): string {
  if (value === null || value === undefined || value === false) return '';
  if (value instanceof Html) return value.markup;
  if (typeof value === 'object') return value.map(render).join('');
  return escapeText(String(value));
}

/** Escapes for text and quoted attributes; characters that no document may hold are left out. */
function escapeText(text: string): string {
  // oxlint-disable-next-line no-control-regex -- the control characters are the ones to leave out
  return text.replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g, '')
    .replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;').replace(/'/g, '&#39;');
}

/** The text that a reader of the markup sees, for where no markup can be shown. */
export function plainText({ markup }: Html): string {
  const names: Readonly<Record<string, string>> = { '&lt;': '<', '&gt;': '>', '&quot;': '"', '&#39;': '\'', '&amp;': '&' };
  return markup.replace(/<\/?q>/g, '"').replace(/<[^>]*>/g, '').replace(/&(lt|gt|quot|#39|amp);/g, (entity) => names[entity]!).replace(/\s+/g, ' ').trim();
}
