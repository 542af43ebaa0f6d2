import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import type { Readings } from '$lib/lay/verdict';

/**
 * Everything a cutting guide is made from: a kept revision and the words around it. Nothing else reaches the paper,
 * so what is not here (contact details, measurements, prices) can't be printed.
 */
export interface GuideInput {
  readonly studio: string;
  readonly orderNumber: string;
  /** Whom the garments are for, short: a name and an initial. Empty when unknown. */
  readonly shortName: string;
  readonly lay: string;
  readonly cloth: string;
  readonly revision: {
    readonly number: number;
    readonly name: string;
    /** SHA-256 of the kept bytes, hex. */
    readonly hash: string;
    /** A date in words, in the studio's zone; null while not released. */
    readonly released: string | null;
  };
  readonly document: LayDocument;
  readonly panels: PanelBook;
  /** As the server's check of this revision gave them. */
  readonly readings: Readings;
  /** What the QR code says: the address that answers whether this paper is current. */
  readonly scanAddress: string;
  /** The studio's unit for lengths in words. */
  readonly lengthUnit: 'cm' | 'in';
  /** When the guide was made: words for the paper, UTC milliseconds for the file. */
  readonly made: { readonly words: string; readonly at: number };
}
