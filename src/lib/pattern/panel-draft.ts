import { z } from 'zod';
import { PANEL_SET_SCHEMA, type Panel } from './panel';
import { openPanelSet, UnreadablePanelSet } from './panel-set';

/*
 * The working copy of the panel desk: the panels of a style being changed, and the list of what was changed by hand. A draft that is drawn
 * anew would lose those, so they stay with the version.
 */

/** One thing that was changed by hand, several of the same kind in one. */
export const handEditSchema = z.object({
  panel: z.string().min(1).max(64),
  panelName: z.string().max(80),
  /** 'moved a point of side' */
  what: z.string().min(1).max(200),
  times: z.int().min(1)
});
export type HandEdit = z.infer<typeof handEditSchema>;

const MOST_EDITS = 300;
export const handEditsSchema = z.array(handEditSchema).max(MOST_EDITS);

export const PANEL_DRAFT_SCHEMA = 1;

export interface PanelDraft {
  readonly schema: typeof PANEL_DRAFT_SCHEMA;
  /** The number of the style version that it was made from. */
  readonly base: number;
  readonly panels: readonly Panel[];
  readonly edits: readonly HandEdit[];
}

const frame = z.object({
  schema: z.literal(PANEL_DRAFT_SCHEMA),
  base: z.int().min(1),
  panels: z.unknown(),
  edits: handEditsSchema
});

/** The one door of working copies. Throws UnreadablePanelSet with what was got and what is expected. */
export function openPanelDraft(json: unknown): PanelDraft {
  const read = frame.safeParse(json);
  if (!read.success)
    throw new UnreadablePanelSet(z.prettifyError(read.error), read.error.issues.slice(0, 50));
  const { panels } = openPanelSet({ schema: PANEL_SET_SCHEMA, panels: read.data.panels });
  return { ...read.data, panels };
}

/** `edits` with one more; the same on the same panel is counted, not repeated. Beyond the most, the panel's own are put into one. */
export function withEdit(edits: readonly HandEdit[], panel: Panel, what: string): HandEdit[] {
  const at = edits.findIndex((edit) => edit.panel === panel.id && edit.what === what.slice(0, 200));
  if (at >= 0)
    return edits.map((edit, i) =>
      i === at ? { ...edit, panelName: panel.name, times: edit.times + 1 } : edit
    );
  const one = { panel: panel.id, panelName: panel.name, what: what.slice(0, 200), times: 1 };
  if (edits.length < MOST_EDITS) return [...edits, one];
  return withEdit(edits.slice(0, -1), panel, 'further changes');
}

/** What two lists say together: the edits a version had already and those made since. */
export function mergedEdits(before: readonly HandEdit[], since: readonly HandEdit[]): HandEdit[] {
  const all = before.map((edit) => ({ ...edit }));
  for (const edit of since) {
    const known = all.find((one) => one.panel === edit.panel && one.what === edit.what);
    if (known) known.times += edit.times;
    else all.push({ ...edit });
  }
  return all.slice(0, MOST_EDITS);
}
