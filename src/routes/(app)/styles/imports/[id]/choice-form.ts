import { z } from 'zod';
import {
  angleOf,
  grainThrough,
  innerUses,
  panelChoiceSchema,
  type ImportChoices,
  type PanelChoice
} from '$lib/interchange/choices';
import { edgesAt, straightness } from '$lib/interchange/edges';
import type { Reading, ReadOutline } from '$lib/interchange/reading';
import { formatLength, parseLength, type LengthUnit } from '$lib/units/length';

/*
 * The preview as a form: what is typed stays text until it is read. Fields are named `p<n>.<what>`; corners and the
 * grain line travel in hidden fields, so that the form is whole without scripts too.
 */

export interface EdgeDraft {
  allowance: string;
  role: string;
  treatment: string;
}

export interface PanelDraft {
  outline: string;
  take: boolean;
  name: string;
  drawn: string;
  allowance: string;
  treatment: string;
  /** By the corner that the edge starts at, as text. */
  edges: Record<string, EdgeDraft>;
  corners: number[];
  howMany: string;
  paired: boolean;
  hand: string;
  symmetric: boolean;
  fold: string;
  role: string;
  turns: string;
  grainTolerance: string;
  grain: PanelChoice['grain'];
  inner: Record<string, string>;
  note: string;
}

export interface ScaleDraft {
  /** What a line measures here, and what it measures really. Both empty: the file is right. */
  measured: string;
  really: string;
}

export interface Draft {
  scale: ScaleDraft;
  panels: PanelDraft[];
}

/** Choices as they are filled in at first. */
export function draftOf(choices: ImportChoices, unit: LengthUnit): Draft {
  return {
    scale: { measured: '', really: '' },
    panels: choices.panels.map((choice) => ({
      ...choice,
      drawn: choice.drawn ?? '',
      allowance: formatLength(choice.allowance, unit, { bare: true }),
      edges: Object.fromEntries(
        choice.exceptions.map((exception) => [
          String(exception.at),
          {
            allowance:
              exception.allowance === null ? '' : formatLength(exception.allowance, unit, { bare: true }),
            role: exception.role ?? '',
            treatment: exception.treatment ?? ''
          }
        ])
      ),
      howMany: String(choice.howMany),
      fold: choice.fold === null ? '' : String(choice.fold),
      grainTolerance: String(choice.grainTolerance)
    }))
  };
}

const cornersSchema = z.array(z.number().min(0).max(10_000)).min(1).max(500);
const grainSchema = panelChoiceSchema.shape.grain;

function json<T>(text: string, schema: z.ZodType<T>): T | null {
  try {
    return schema.safeParse(JSON.parse(text)).data ?? null;
  } catch (error) {
    // What is not JSON at all is as little use as what does not fit: the fields start again from the reading.
    if (error instanceof SyntaxError) return null;
    throw error;
  }
}

/** A posted preview as a draft, for the same outlines as `first`. */
export function readDraft(form: FormData, first: Draft, reading: Reading): Draft {
  const text = (name: string): string => {
    const value = form.get(name);
    return typeof value === 'string' ? value.slice(0, 1000) : '';
  };
  return {
    scale: { measured: text('measured'), really: text('really') },
    panels: first.panels.map((start, i) => {
      const p = `p${i}`;
      const outline = reading.outlines.find(({ id }) => id === start.outline)!;
      const corners = json(text(`${p}.corners`), cornersSchema) ?? start.corners;
      const edges: Record<string, EdgeDraft> = {};
      for (const { at } of edgesAt(outline.path, corners)) {
        const edge = {
          allowance: text(`${p}.edge.${at}.allowance`),
          role: text(`${p}.edge.${at}.role`),
          treatment: text(`${p}.edge.${at}.treatment`)
        };
        if (edge.allowance !== '' || edge.role !== '' || edge.treatment !== '') edges[String(at)] = edge;
      }
      const kept = json(text(`${p}.grain`), grainSchema) ?? start.grain;
      return {
        outline: start.outline,
        take: form.has(`${p}.take`),
        name: text(`${p}.name`),
        drawn: text(`${p}.drawn`),
        allowance: text(`${p}.allowance`),
        treatment: text(`${p}.treatment`),
        edges,
        corners,
        howMany: text(`${p}.howMany`),
        paired: form.has(`${p}.paired`),
        hand: text(`${p}.hand`),
        symmetric: form.has(`${p}.symmetric`),
        fold: text(`${p}.fold`),
        role: text(`${p}.role`),
        turns: text(`${p}.turns`),
        grainTolerance: text(`${p}.grainTolerance`),
        grain: {
          ...(grainAlong(outline, corners, text(`${p}.grainAlong`), kept) ?? kept),
          confirmed: form.has(`${p}.grainConfirmed`)
        },
        inner: Object.fromEntries(
          Object.keys(start.inner).map((id) => [id, text(`${p}.inner.${id}`) || start.inner[id]!])
        ),
        note: text(`${p}.note`)
      };
    })
  };
}

/** The grain line that a choice names: along x, along y or along an edge; null to leave it as it is. */
export function grainAlong(
  outline: ReadOutline,
  corners: readonly number[],
  along: string,
  now: { from: { x: number; y: number }; to: { x: number; y: number } }
): Pick<PanelChoice['grain'], 'from' | 'to'> | null {
  if (along === 'x') return grainThrough(outline, 0);
  if (along === 'y') return grainThrough(outline, 90);
  if (along === 'turned') return { from: now.to, to: now.from };
  if (!along.startsWith('edge:')) return null;
  const edge = edgesAt(outline.path, corners).find(({ at }) => String(at) === along.slice(5));
  if (!edge || !straightness(edge)) return null;
  return grainThrough(outline, angleOf({ from: edge.from, to: edge.segments[edge.segments.length - 1]!.to }));
}

/** What was typed as choices, or what is wrong, by field name. */
export function choicesOf(
  draft: Draft,
  unit: LengthUnit
): { choices: ImportChoices; errors: null } | { choices: null; errors: Record<string, string> } {
  const errors: Record<string, string> = {};
  const length = (name: string, text: string, least: number, most: number): number => {
    const read = parseLength(text, unit, { least, most });
    if (read.error !== undefined) errors[name] = read.error;
    return read.mm ?? least;
  };
  let scale = 1;
  // Without the true length nothing was checked, and the file counts as right.
  if (draft.scale.really.trim() !== '')
    scale =
      length('really', draft.scale.really, 1, 100_000) /
      length('measured', draft.scale.measured, 0.01, 1_000_000);
  if (!(scale >= 0.0001 && scale <= 10_000))
    errors['really'] ??= 'These two lengths can’t belong to the same line.';
  const panels = draft.panels.map((panel, i): unknown => {
    const p = `p${i}`;
    if (!panel.take) return null;
    const howMany = Number(panel.howMany);
    if (!Number.isInteger(howMany) || howMany < 1 || howMany > 200)
      errors[`${p}.howMany`] = 'A whole number from 1 to 200.';
    const tolerance = Number(panel.grainTolerance.replace(',', '.') || '0');
    if (!(tolerance >= 0 && tolerance <= 45)) errors[`${p}.grainTolerance`] = 'Degrees from 0 to 45.';
    return {
      ...panel,
      name: panel.name,
      drawn: panel.drawn === '' ? null : panel.drawn,
      allowance: length(`${p}.allowance`, panel.allowance, 0, 300),
      exceptions: Object.entries(panel.edges).map(([at, edge]) => ({
        at: Number(at),
        allowance: edge.allowance === '' ? null : length(`${p}.edge.${at}.allowance`, edge.allowance, 0, 300),
        role: edge.role === '' ? null : edge.role,
        treatment: edge.treatment === '' ? null : edge.treatment
      })),
      howMany: errors[`${p}.howMany`] ? 1 : howMany,
      fold: panel.fold === '' ? null : Number(panel.fold),
      // On the fold it is one whole piece: nothing that could be said otherwise counts.
      paired: panel.fold === '' && panel.paired,
      grainTolerance: errors[`${p}.grainTolerance`] ? 0 : tolerance
    };
  });
  const parsed: PanelChoice[] = [];
  panels.forEach((panel, i) => {
    if (panel === null) return;
    const checked = panelChoiceSchema.safeParse(panel);
    if (checked.success) parsed.push(checked.data);
    else
      for (const issue of checked.error.issues) {
        const field = String(issue.path[0] ?? 'outline');
        errors[`p${i}.${field}`] ??=
          field === 'drawn' ? 'Choose one.' : `This can’t be read: ${issue.message}`;
      }
  });
  if (Object.keys(errors).length > 0) return { choices: null, errors };
  return { choices: { scale, panels: parsed }, errors: null };
}

export const innerWords: Readonly<Record<(typeof innerUses)[number], string>> = {
  sew: 'its sew line',
  cutOut: 'a cut-out',
  internal: 'a line to be marked',
  drill: 'a drill hole',
  leaveOut: 'left out'
};
