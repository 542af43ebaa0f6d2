import { z } from 'zod';
import type { LayDocument } from './document';
import type { PanelBook } from './panel-book';
import { openLayDocument, UnreadableDocument, upgraded, type Upgrade } from './stored-lay';

/*
 * A lay as a revision keeps it: everything that check and guide need, with the resolved outlines inside, so that a later
 * change of code or style never changes it. Its bytes are written once; the hash is taken over exactly these bytes.
 */

/** What paper and screen call things. No price, no contact, no measurement. */
export interface KeptLabels {
  readonly studio: string;
  readonly lay: string;
  readonly order: {
    readonly number: number;
    /** What the workroom calls the client: 'Ada L.' */
    readonly shortName: string;
  };
  readonly cloth: { readonly name: string; readonly fibre: string; readonly colour: string };
}

export const KEPT_LAY_SCHEMA = 1;

export interface KeptLay {
  readonly schema: typeof KEPT_LAY_SCHEMA;
  readonly document: LayDocument;
  /** Only the panels that the document names. */
  readonly panels: PanelBook;
  readonly labels: KeptLabels;
  /** UTC milliseconds. */
  readonly keptAt: number;
}

const upgrades: ReadonlyMap<number, Upgrade> = new Map();

const labelsSchema = z.object({
  studio: z.string(),
  lay: z.string(),
  order: z.object({ number: z.int(), shortName: z.string() }),
  cloth: z.object({ name: z.string(), fibre: z.string(), colour: z.string() })
});

const keptLaySchema = z.object({
  labels: labelsSchema,
  keptAt: z.number(),
  // Written by this product from resolved panels and guarded by the hash: the outlines are not checked again.
  panels: z.record(
    z.string(),
    z.custom<PanelBook[string]>((value) => typeof value === 'object' && value !== null)
  )
});

/** The kept lay in `json`, its document through the door of lay documents. Throws UnreadableDocument. */
export function openKeptLay(json: unknown): KeptLay {
  const kept = upgraded(json, KEPT_LAY_SCHEMA, upgrades);
  const parsed = keptLaySchema.safeParse(kept);
  if (!parsed.success) throw new UnreadableDocument(z.prettifyError(parsed.error), parsed.error.issues);
  return { schema: KEPT_LAY_SCHEMA, ...parsed.data, document: openLayDocument(kept.document) };
}

/** 'Ada Lovage' → 'Ada L.': enough for the workroom, not who the client is. */
export function shortName(clientName: string): string {
  const words = clientName.trim().split(/\s+/);
  const last = words.length > 1 ? words.at(-1)! : '';
  return last === '' ? words[0]! : `${words[0]!} ${[...last][0]!}.`;
}
