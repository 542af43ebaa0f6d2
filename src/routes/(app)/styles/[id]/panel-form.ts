import { panelSchema, type Panel } from '$lib/pattern/panel';
import { formatLength, parseLength, type LengthUnit } from '$lib/units/length';

/* The attributes of the panels of a version as a form. Outlines are not changed here: that takes a new upload. */

export interface AttributeDraft {
  id: string;
  name: string;
  howMany: string;
  paired: boolean;
  hand: string;
  symmetric: boolean;
  role: string;
  turns: string;
  grainTolerance: string;
  grainConfirmed: boolean;
  note: string;
  /** By edge id. */
  edges: Record<string, { allowance: string; role: string; treatment: string }>;
}

/** What the form shows at first. */
export function draftsOf(panels: readonly Panel[], unit: LengthUnit): AttributeDraft[] {
  return panels.map((panel) => ({
    id: panel.id,
    name: panel.name,
    howMany: String(panel.howMany),
    paired: panel.paired,
    hand: panel.hand,
    symmetric: panel.symmetric,
    role: panel.role,
    turns: panel.turns,
    grainTolerance: String(panel.grainTolerance),
    grainConfirmed: panel.grain.confirmed,
    note: panel.note,
    edges: Object.fromEntries(
      panel.edges.map((edge, i) => [
        edge.id,
        {
          allowance: formatLength(edge.allowance, unit, { bare: true }),
          role: edge.role,
          treatment: panel.corners[i]!.treatment
        }
      ])
    )
  }));
}

/** What was typed, for the panels that the version has. */
export function readDrafts(form: FormData, panels: readonly Panel[]): AttributeDraft[] {
  const text = (name: string): string => {
    const value = form.get(name);
    return typeof value === 'string' ? value.slice(0, 1000) : '';
  };
  return panels.map((panel) => {
    const p = panel.id;
    return {
      id: panel.id,
      name: text(`${p}.name`),
      howMany: text(`${p}.howMany`),
      paired: form.has(`${p}.paired`),
      hand: text(`${p}.hand`),
      symmetric: form.has(`${p}.symmetric`),
      role: text(`${p}.role`),
      turns: text(`${p}.turns`),
      grainTolerance: text(`${p}.grainTolerance`),
      grainConfirmed: form.has(`${p}.grainConfirmed`),
      note: text(`${p}.note`),
      edges: Object.fromEntries(
        panel.edges.map((edge) => [
          edge.id,
          {
            allowance: text(`${p}.${edge.id}.allowance`),
            role: text(`${p}.${edge.id}.role`),
            treatment: text(`${p}.${edge.id}.treatment`)
          }
        ])
      )
    };
  });
}

/** The panels with the attributes that were typed, or what is wrong, by field name. A length left as it was shown is
 * kept to its last digit. */
export function panelsOf(
  panels: readonly Panel[],
  drafts: readonly AttributeDraft[],
  unit: LengthUnit
): { panels: Panel[]; errors: null } | { panels: null; errors: Record<string, string> } {
  const errors: Record<string, string> = {};
  const shown = draftsOf(panels, unit);
  const changed = panels.map((panel, i): unknown => {
    const draft = drafts[i]!;
    const p = panel.id;
    const onFold = panel.fold !== null;
    const howMany = Number(draft.howMany);
    if (!Number.isInteger(howMany) || howMany < 1 || howMany > 200)
      errors[`${p}.howMany`] = 'A whole number from 1 to 200.';
    const tolerance = Number(draft.grainTolerance.replace(',', '.') || '0');
    if (!(tolerance >= 0 && tolerance <= 45)) errors[`${p}.grainTolerance`] = 'Degrees from 0 to 45.';
    const allowance = (edge: Panel['edges'][number]): number => {
      const typed = draft.edges[edge.id]!.allowance;
      if (edge.role === 'fold' || typed === shown[i]!.edges[edge.id]!.allowance) return edge.allowance;
      const read = parseLength(typed, unit, { least: 0, most: 300 });
      if (read.error !== undefined) errors[`${p}.${edge.id}.allowance`] = read.error;
      return read.mm ?? 0;
    };
    return {
      ...panel,
      name: draft.name,
      howMany,
      paired: !onFold && draft.paired,
      hand: draft.hand || panel.hand,
      symmetric: onFold || draft.symmetric,
      role: draft.role,
      turns: draft.turns,
      grainTolerance: tolerance,
      grain: { ...panel.grain, confirmed: draft.grainConfirmed },
      note: draft.note,
      edges: panel.edges.map((edge) => ({
        ...edge,
        allowance: allowance(edge),
        role: edge.role === 'fold' ? 'fold' : draft.edges[edge.id]!.role
      })),
      corners: panel.corners.map((corner, k) => ({
        ...corner,
        treatment: draft.edges[panel.edges[k]!.id]!.treatment
      }))
    };
  });
  const checked: Panel[] = [];
  const names = new Set<string>();
  changed.forEach((panel, i) => {
    const p = panels[i]!.id;
    const read = panelSchema.safeParse(panel);
    if (!read.success) {
      for (const { path, message } of read.error.issues) errors[`${p}.${String(path[0] ?? '')}`] ??= message;
      return;
    }
    if (names.has(read.data.name.toLowerCase()))
      errors[`${p}.name`] ??= `Two panels are called ${read.data.name}.`;
    names.add(read.data.name.toLowerCase());
    checked.push(read.data);
  });
  if (Object.keys(errors).length > 0) return { panels: null, errors };
  return { panels: checked, errors: null };
}
