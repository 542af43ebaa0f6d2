import { z } from 'zod';
import { PANEL_SET_SCHEMA, panelSetSchema, type PanelSet } from './panel';

/*
 * The one door of panel sets: whatever was stored, uploaded or imported comes in through `openPanelSet`.
 */

/** Brings a panel set from one schema number to the next. Pure. */
export type PanelSetUpgrade = (set: Readonly<Record<string, unknown>>) => Record<string, unknown>;

/** `upgrades.get(n)` brings schema n to n + 1. Each gets a test with a literal set before and after. */
const upgrades: ReadonlyMap<number, PanelSetUpgrade> = new Map();

/** A panel set that does not fit, with what was got and what is expected. */
export class UnreadablePanelSet extends Error {
  constructor(
    message: string,
    readonly issues: readonly { readonly path: readonly PropertyKey[]; readonly message: string }[] = []
  ) {
    super(message);
    this.name = 'UnreadablePanelSet';
  }
}

/**
 * The panel set in `json`, brought to the present schema, validated, capped. Throws UnreadablePanelSet with what was got and what is
 * expected.
 */
export function openPanelSet(
  json: unknown,
  steps: ReadonlyMap<number, PanelSetUpgrade> = upgrades,
  newest: number = PANEL_SET_SCHEMA
): PanelSet {
  if (typeof json !== 'object' || json === null || Array.isArray(json))
    throw new UnreadablePanelSet(
      `Expected a set of panels, got ${Array.isArray(json) ? 'a list' : json === null ? 'null' : typeof json}.`
    );
  let set = json as Readonly<Record<string, unknown>>;
  const got = set.schema;
  if (typeof got !== 'number' || !Number.isInteger(got) || got < 1)
    throw new UnreadablePanelSet(`Expected a schema number of 1 to ${newest}, got ${JSON.stringify(got)}.`);
  if (got > newest)
    throw new UnreadablePanelSet(
      `Expected schema ${newest} or older, got ${got}: it was made by a newer version of the product.`
    );
  for (let number = got; number < newest; number++) {
    const step = steps.get(number);
    if (!step) throw new UnreadablePanelSet(`Schema ${number} can no longer be read.`);
    set = { ...step(set), schema: number + 1 };
  }
  const { panels } = set;
  if (Array.isArray(panels) && panels.length > 300)
    throw new UnreadablePanelSet(`Expected at most 300 panels, got ${panels.length}.`);
  const parsed = panelSetSchema.safeParse({ ...set, schema: PANEL_SET_SCHEMA });
  if (!parsed.success)
    throw new UnreadablePanelSet(z.prettifyError(parsed.error), parsed.error.issues.slice(0, 50));
  const seen = new Set<string>();
  for (const { id } of parsed.data.panels) {
    if (seen.has(id)) throw new UnreadablePanelSet(`Expected every panel once, got ${id} twice.`);
    seen.add(id);
  }
  return parsed.data;
}
