import { z } from 'zod';
import { choiceOf, spreadOf } from '$lib/cloth/spread';
import { laidWidth, type Strip } from '$lib/cloth/strip';
import { LAY_SCHEMA, layDocumentSchema, type Garment, type LayDocument } from './document';
import { needsOf } from './needs';
import { same } from './same';
import type { LayPanel, PanelBook } from './panel-book';

/*
 * The one door of lay documents: whatever was stored, posted or imported comes in through `openLayDocument`.
 */

/** Brings a document from one schema number to the next. Pure. */
export type Upgrade = (document: Readonly<Record<string, unknown>>) => Record<string, unknown>;

/** `upgrades.get(n)` brings schema n to n + 1. Each gets a test with a literal document before and after. */
const upgrades: ReadonlyMap<number, Upgrade> = new Map([
  [1, toSecond],
  [2, toThird]
]);

/** Schema 2 knows the cloth length that a lay is made on, flaws with two measures, shrinking, splices and whole repeats. */
function toSecond(document: Readonly<Record<string, unknown>>): Record<string, unknown> {
  const strip = document.strip as Record<string, unknown> | null | undefined;
  const rules = document.rules as Record<string, unknown> | null | undefined;
  const flaws = strip?.flaws;
  return {
    ...document,
    ...(strip && {
      strip: {
        ...strip,
        flaws: Array.isArray(flaws)
          ? flaws.map((flaw: Record<string, unknown>) => ({ ...flaw, along: 0, across: 0 }))
          : flaws,
        given: null,
        shrinkage: { treatment: 'none', warp: 0, weft: 0 },
        splices: { count: 0, each: 0 },
        wholeRepeats: false
      }
    }),
    ...(rules && { rules: { ...rules, mayCoverFlaws: [] } })
  };
}

/** Schema 3 knows match groups that are mirrored; those of before were not. */
function toThird(document: Readonly<Record<string, unknown>>): Record<string, unknown> {
  const rules = document.rules as Record<string, unknown> | null | undefined;
  const groups = rules?.matchGroups;
  if (!rules || !Array.isArray(groups)) return { ...document };
  return {
    ...document,
    rules: {
      ...rules,
      matchGroups: groups.map((group: Record<string, unknown>) => ({ ...group, mirrored: false }))
    }
  };
}

/** A document that does not fit, with what was got and what is expected. */
export class UnreadableDocument extends Error {
  constructor(
    message: string,
    readonly issues: readonly { readonly path: readonly PropertyKey[]; readonly message: string }[] = []
  ) {
    super(message);
    this.name = 'UnreadableDocument';
  }
}

/**
 * `json` brought to schema `newest` by the numbered upgrades. Throws UnreadableDocument for what is no object, has no
 * schema number, is newer than `newest` or older than the first upgrade.
 */
export function upgraded(
  json: unknown,
  newest: number,
  steps: ReadonlyMap<number, Upgrade>
): Readonly<Record<string, unknown>> {
  if (typeof json !== 'object' || json === null || Array.isArray(json))
    throw new UnreadableDocument(
      `Expected a lay document, got ${Array.isArray(json) ? 'a list' : json === null ? 'null' : typeof json}.`
    );
  let document = json as Readonly<Record<string, unknown>>;
  const got = document.schema;
  if (typeof got !== 'number' || !Number.isInteger(got) || got < 1)
    throw new UnreadableDocument(`Expected a schema number of 1 to ${newest}, got ${JSON.stringify(got)}.`);
  if (got > newest)
    throw new UnreadableDocument(
      `Expected schema ${newest} or older, got ${got}: it was made by a newer version of the product.`
    );
  for (let number = got; number < newest; number++) {
    const step = steps.get(number);
    if (!step) throw new UnreadableDocument(`Schema ${number} can no longer be read.`);
    document = { ...step(document), schema: number + 1 };
  }
  return document;
}

/** Stripes that meet within this are seen as one. Common practice, no published source. */
export const MATCH_TOLERANCE = 2;

const caps = { garments: 500, needs: 5000, placements: 5000 } as const;

/**
 * The lay document in `json`, upgraded, validated, capped, every number on its grid. Throws UnreadableDocument with
 * what was got and what is expected.
 */
export function openLayDocument(json: unknown): LayDocument {
  const document = upgraded(json, LAY_SCHEMA, upgrades);
  for (const [list, most] of Object.entries(caps)) {
    const got = document[list];
    if (Array.isArray(got) && got.length > most)
      throw new UnreadableDocument(`Expected at most ${most} ${list}, got ${got.length}.`);
  }
  const parsed = layDocumentSchema.safeParse(document);
  if (!parsed.success)
    throw new UnreadableDocument(z.prettifyError(parsed.error), parsed.error.issues.slice(0, 50));
  refuseContradictions(parsed.data);
  return parsed.data;
}

/** What a schema can't say: ids stand once, and the spread covers the usable width. */
function refuseContradictions({ strip, garments, placements }: LayDocument): void {
  for (const [what, items] of [
    ['garment', garments],
    ['placement', placements]
  ] as const) {
    const seen = new Set<string>();
    for (const { id } of items) {
      if (seen.has(id)) throw new UnreadableDocument(`Expected every ${what} once, got ${id} twice.`);
      seen.add(id);
    }
  }
  refuseOddSpread(strip);
  if (strip.usableWidth > strip.fullWidth)
    throw new UnreadableDocument(
      `Expected a usable width of at most the full width of ${strip.fullWidth} mm, got ${strip.usableWidth} mm.`
    );
}

/** The zones lie side by side, and are one of the spreads of this cloth: anything else would count its cloth wrongly. */
function refuseOddSpread(strip: Strip): void {
  let edge = 0;
  for (const zone of strip.spread) {
    if (zone.from !== edge || zone.to <= zone.from)
      throw new UnreadableDocument(
        `Expected the zones of the spread side by side from 0 mm, got one from ${zone.from} to ${zone.to} mm.`
      );
    edge = zone.to;
  }
  if (strip.spread[0]!.layers.length === 0)
    throw new UnreadableDocument('Expected at least one layer in the first zone of the spread, got none.');
  let expected: Strip['spread'];
  try {
    expected = spreadOf(strip, choiceOf(strip));
  } catch (fault) {
    throw new UnreadableDocument(fault instanceof RangeError ? `${fault.message}.` : String(fault));
  }
  if (!same(strip.spread, expected))
    throw new UnreadableDocument(
      `Expected the spread to end at ${laidWidth({ spread: expected })} mm on a usable width of ${strip.usableWidth} mm, got ${edge} mm, or layers that are none of its spreads.`
    );
}

/** A lay with everything still on the Rail. `takes`: see `needsOf`. */
export function newLay(from: {
  readonly strip: Strip;
  readonly garments: readonly Garment[];
  readonly book: PanelBook;
  readonly takes?: (garment: Garment, panel: LayPanel) => boolean;
}): LayDocument {
  return {
    schema: LAY_SCHEMA,
    strip: from.strip,
    garments: [...from.garments],
    needs: needsOf(from.garments, from.book, from.strip, from.takes),
    placements: [],
    rules: { matchGroups: [], matchTolerance: MATCH_TOLERANCE, mayCoverFlaws: [] }
  };
}
