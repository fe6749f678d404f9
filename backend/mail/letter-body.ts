import { NOT_IN_A_LINE } from '#shared/contract/people';

/** A part of a letter: words, the address of a page of ours on a line of its own, or facts by their names. */
export type Passage = string | { readonly page: string } | { readonly facts: readonly (readonly [name: string, value: string])[] };

const OBEYED = new RegExp(NOT_IN_A_LINE, 'gu');
const ESCAPES: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/** Names and what browsers call themselves come from strangers: they neither break a line nor turn its direction. */
const oneLine = (words: string): string => words.replace(OBEYED, ' ');
const escaped = (words: string): string => oneLine(words).replace(/[&<>"']/g, (sign) => ESCAPES[sign] ?? sign);

/**
 * What a letter says, as text and as HTML, from the same passages.
 *
 * @param subject the title of the HTML form
 * @param passages in their order; whatever stands in them shows as it is, in both forms
 */
export function letterBody(subject: string, passages: readonly Passage[]): { readonly text: string; readonly html: string } {
  return {
    text: `${passages.map(asText).join('\n\n')}\n`,
    html: [
      '<!doctype html>',
      `<html lang="en"><head><meta charset="utf-8"><title>${escaped(subject)}</title></head>`,
      '<body style="font: 16px/1.5 sans-serif; max-width: 40em; overflow-wrap: anywhere">',
      ...passages.map(asHtml),
      '</body></html>',
      '',
    ].join('\n'),
  };
}

function asText(passage: Passage): string {
  if (typeof passage === 'string') return oneLine(passage);
  if ('page' in passage) return passage.page;
  return passage.facts.map(([name, value]) => `${name}: ${oneLine(value)}`).join('\n');
}

function asHtml(passage: Passage): string {
  if (typeof passage === 'string') return `<p>${escaped(passage)}</p>`;
  if ('page' in passage) return `<p><a href="${escaped(passage.page)}">${escaped(passage.page)}</a></p>`;
  return `<p>${passage.facts.map(([name, value]) => `${escaped(name)}: <strong>${escaped(value)}</strong>`).join('<br>\n')}</p>`;
}
