import { createHash } from 'node:crypto';
import { z } from 'zod';
import { PdfWriter } from '$lib/guide/pdf';
import { quotePages, type QuoteDocument } from '$lib/guide/quote-paper';
import { taxModes } from '$lib/units/share';
import { guideFonts } from './guide-fonts';
import { Problem } from './problem';

/* The door of stored quotes: bytes in, bytes out, and their paper. */

const minor = z.number().int();
const line = z.object({ words: z.string(), amount: minor });
const quoteSchema = z.object({
  schema: z.literal(1),
  studio: z.object({ name: z.string(), letterhead: z.string() }),
  order: z.number().int(),
  version: z.number().int(),
  client: z.string(),
  currency: z.string().regex(/^[A-Z]{3}$/),
  lengthUnit: z.enum(['cm', 'in']),
  day: z.string(),
  validUntil: z.string(),
  garments: z.array(z.object({ name: z.string(), label: z.string(), quantity: z.number().int() })),
  cloths: z.array(
    z.object({
      name: z.string(),
      roles: z.string(),
      width: z.number(),
      length: z.number().nullable(),
      own: z.boolean(),
      amount: minor
    })
  ),
  trims: z.array(line),
  extras: z.array(line),
  minutes: z.number().int(),
  making: minor.nullable(),
  tax: z.object({ mode: z.enum(taxModes), rate: z.number().int(), amount: minor }),
  net: minor,
  total: minor,
  deposit: minor,
  fittings: z.number().int(),
  due: z.string().nullable(),
  dates: z.string(),
  alterations: z.string(),
  exclusions: z.string(),
  terms: z.string(),
  law: z.string()
});

/** The bytes that are kept, and their SHA-256. */
export function sealed(quote: QuoteDocument): { bytes: Buffer; hash: string } {
  const bytes = Buffer.from(JSON.stringify(quote), 'utf8');
  return { bytes, hash: hashOf(bytes) };
}

const hashOf = (bytes: Buffer): string => createHash('sha256').update(bytes).digest('hex');

/** Opens kept bytes. @throws Problem 500 quote-unreadable when they are not what was kept, or of an unknown form. */
export function openQuote(bytes: Buffer, hash: string): QuoteDocument {
  const refuse = (detail: string) =>
    new Problem(500, 'quote-unreadable', 'The stored quote can’t be read', detail);
  if (hashOf(bytes) !== hash) throw refuse('Its bytes are not those that were kept.');
  const stored: unknown = JSON.parse(bytes.toString('utf8'));
  const read = quoteSchema.safeParse(stored);
  if (!read.success)
    throw refuse(
      `Expected schema 1, got ${JSON.stringify((stored as { schema?: unknown }).schema)}: ${z.prettifyError(read.error).slice(0, 300)}`
    );
  return read.data;
}

/** The quote as a PDF. `at` is the date inside the file, so that the same quote is the same file. */
export async function quotePdf(quote: QuoteDocument, at: number): Promise<Uint8Array> {
  const writer = await PdfWriter.open(
    await guideFonts(),
    `${quote.studio.name}, quote ${quote.order}.${quote.version}`,
    at
  );
  for (const page of quotePages(quote, writer, 'A4')) writer.add(page);
  return writer.bytes();
}

/** The paper of a kept quote as a download. */
export async function pdfAnswer(quote: {
  readonly document: QuoteDocument;
  readonly createdAt: number;
}): Promise<Response> {
  const bytes = await quotePdf(quote.document, quote.createdAt);
  const { order, version } = quote.document;
  return new Response(new Uint8Array(bytes), {
    headers: {
      'content-type': 'application/pdf',
      'content-length': String(bytes.length),
      'content-disposition': `attachment; filename="quote-${order}-${version}.pdf"`,
      'cache-control': 'private, no-store',
      'x-robots-tag': 'noindex',
      'x-content-type-options': 'nosniff'
    }
  });
}
