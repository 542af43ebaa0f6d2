/*
 * How a mail of the product reads: plain text first, the same as simple HTML. Wording is in door-mails.ts and its like.
 */

export interface Wording {
  readonly subject: string;
  /** Short paragraphs, in order. */
  readonly paragraphs: readonly string[];
  /** What to click, after the paragraphs. */
  readonly link?: { readonly word: string; readonly href: string };
  /** After the link. */
  readonly ending?: readonly string[];
}

/** A wording as subject, plain text and HTML. Everything that a person typed is escaped, line breaks in subjects removed. */
export function composed(wording: Wording): { subject: string; text: string; html: string } {
  const { subject, paragraphs, link, ending = [] } = wording;
  const text = [...paragraphs, ...(link ? [`${link.word}:\n${link.href}`] : []), ...ending, '-- \nWarpwise'];
  const p = (words: string) => `<p style="margin:0 0 16px">${escaped(words).replaceAll('\n', '<br>')}</p>`;
  const button = link
    ? `<p style="margin:24px 0"><a href="${escaped(link.href)}" style="display:inline-block;padding:12px 20px;` +
      `background:#2F5D7C;color:#FFFDF8;text-decoration:none;border-radius:4px">${escaped(link.word)}</a></p>` +
      `<p style="margin:0 0 16px;color:#6E6A62;font-size:14px">${escaped(link.href)}</p>`
    : '';
  return {
    subject: subject.replace(/\s+/g, ' ').trim(),
    text: `${text.join('\n\n')}\n`,
    html:
      `<!doctype html><html lang="en"><body style="margin:0;background:#F6F1E7;color:#23262B;` +
      `font:16px/24px system-ui,sans-serif"><div style="max-width:560px;margin:0 auto;padding:32px 24px">` +
      `<p style="margin:0 0 24px;font-size:20px;font-weight:600">Warpwise</p>` +
      `${paragraphs.map(p).join('')}${button}${ending.map(p).join('')}</div></body></html>`
  };
}

function escaped(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}
