/*
 * Reads a mail as far as the product writes them: headers with encoded words (RFC 2047), one or several parts
 * (RFC 2046), quoted-printable and base64 (RFC 2045), UTF-8.
 */

export interface ReadMail {
  readonly from: string;
  readonly to: string;
  readonly subject: string;
  readonly messageId: string;
  readonly text: string;
  readonly html: string;
}

export function readMail(raw: Buffer): ReadMail {
  const whole = partOf(raw.toString('latin1'));
  const header = (name: string) => decodedWords(whole.headers.get(name) ?? '');
  const parts = leavesOf(whole);
  const body = (type: string) =>
    parts.find((part) => (part.headers.get('content-type') ?? 'text/plain').startsWith(type));
  const textOf = (part: Part | undefined) => (part ? decodedBody(part) : '');
  return {
    from: header('from'),
    to: header('to'),
    subject: header('subject'),
    messageId: header('message-id'),
    text: textOf(body('text/plain')),
    html: textOf(body('text/html'))
  };
}

interface Part {
  readonly headers: ReadonlyMap<string, string>;
  readonly body: string;
}

function partOf(text: string): Part {
  const end = text.search(/\r?\n\r?\n/);
  const head = end < 0 ? text : text.slice(0, end);
  const headers = new Map<string, string>();
  for (const line of head.replace(/\r?\n[ \t]+/g, ' ').split(/\r?\n/)) {
    const colon = line.indexOf(':');
    if (colon > 0) headers.set(line.slice(0, colon).toLowerCase(), line.slice(colon + 1).trim());
  }
  return { headers, body: end < 0 ? '' : text.slice(end).replace(/^\r?\n\r?\n/, '') };
}

function leavesOf(part: Part): Part[] {
  const boundary = /^multipart\/[^;]+;.*boundary="?([^";]+)"?/i.exec(
    part.headers.get('content-type') ?? ''
  )?.[1];
  if (boundary === undefined) return [part];
  return part.body
    .split(`--${boundary}`)
    .slice(1, -1)
    .flatMap((text) => leavesOf(partOf(text.replace(/^\r?\n/, '').replace(/\r?\n$/, ''))));
}

function decodedBody({ headers, body }: Part): string {
  const encoding = (headers.get('content-transfer-encoding') ?? '7bit').toLowerCase();
  if (encoding === 'base64') return Buffer.from(body, 'base64').toString('utf8');
  if (encoding === 'quoted-printable') return fromQuoted(body.replace(/=\r?\n/g, '')).replace(/\r\n/g, '\n');
  return Buffer.from(body, 'latin1').toString('utf8').replace(/\r\n/g, '\n');
}

const fromQuoted = (text: string): string =>
  Buffer.from(
    text.replace(/=([0-9A-F]{2})/gi, (_, hex: string) => String.fromCharCode(parseInt(hex, 16))),
    'latin1'
  ).toString('utf8');

function decodedWords(text: string): string {
  return text
    .replace(/\?=\s+=\?/g, '?==?')
    .replace(/=\?utf-8\?([qb])\?([^?]*)\?=/gi, (_, kind: string, word: string) =>
      kind.toLowerCase() === 'b'
        ? Buffer.from(word, 'base64').toString('utf8')
        : fromQuoted(word.replaceAll('_', ' '))
    );
}
