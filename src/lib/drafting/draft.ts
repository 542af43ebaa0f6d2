import { panelFindings } from '$lib/pattern/panel-check';
import { panelSchema, type Panel } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import { readChoices, type Choice, type Chosen, type ChoiceFault } from './choices';
import type { Sheet } from './construction';
import type { Body, PointId } from './measurement-points';
import { walkSeam, type Seam, type SeamWalk } from './seam-walk';

/*
 * A draft: measurements and choices in, panels and a drafting sheet out. Pure: the same numbers give the same panels, whenever and
 * wherever they are drawn.
 */

export interface Draft {
  readonly id: string;
  /** Goes up whenever the same measurements and choices would give other panels. */
  readonly version: number;
  readonly name: string;
  /** One or two sentences: what it is for, and where the method comes from. */
  readonly about: string;
  /** Measurements that it can't be drawn without. */
  readonly needs: readonly PointId[];
  /** Measurements that it takes where they are known. */
  readonly mayUse: readonly PointId[];
  readonly choices: readonly Choice[];
  /** @throws CannotDraft when a measurement or a choice does not go with the others. */
  readonly draw: (body: Body, chosen: Chosen) => Drafted;
}

/** The levels at which a finished garment is compared with the body. */
export type Level = 'bust' | 'underBust' | 'waist' | 'hip' | 'hem' | 'topEdge' | 'armhole' | 'upperArm';

/** A finished girth: what the panels add up to, and what it should be. */
export interface Total {
  readonly level: Level;
  /** The body there; null where it is not measured. */
  readonly body: Millimetres | null;
  /** Wanted: finished = body + ease − gap. */
  readonly ease: Millimetres;
  /** An opening that stays: the lacing. */
  readonly gap: Millimetres;
  /** Measured on the panels. */
  readonly finished: Millimetres;
}

export interface Bone {
  readonly name: string;
  readonly count: number;
  /** The channel less 1 cm at each end. */
  readonly length: Millimetres;
}

/** Something bought by length or by the piece. */
export interface Supply {
  readonly name: string;
  readonly count: number;
  /** null for what has no length. */
  readonly length: Millimetres | null;
}

export interface Drafted {
  readonly panels: readonly Panel[];
  readonly sheet: Sheet;
  readonly seams: readonly Seam[];
  readonly totals: readonly Total[];
  readonly bones: readonly Bone[];
  /** What else it takes: lacing, ribbon, tape, with lengths. */
  readonly supplies: readonly Supply[];
  /** What the maker should look at: findings of the draft about this body. */
  readonly warnings: readonly string[];
  /** Where the garment can hurt. */
  readonly cautions: readonly string[];
}

/** A measurement or a choice with which the draft can't be drawn. */
export class CannotDraft extends Error {
  constructor(
    /** The measurement to look at, or null where it is a choice. */
    readonly measurement: PointId | null,
    readonly choice: string | null,
    message: string
  ) {
    super(message);
    this.name = 'CannotDraft';
  }
}

export interface DraftFault {
  readonly measurement: PointId | null;
  readonly choice: string | null;
  readonly message: string;
}

/** A finished draft with its own checks. */
export interface DraftResult extends Drafted {
  readonly walks: readonly SeamWalk[];
}

export type Drawn =
  | { readonly ok: true; readonly result: DraftResult }
  | { readonly ok: false; readonly faults: readonly DraftFault[] };

/** A finished girth this far from what it should be is named. */
export const TOTAL_TOLERANCE: Millimetres = 10;

/** How far a finished girth is from body + ease − gap; null where the body is not known. */
export function totalOff({ body, ease, gap, finished }: Total): Millimetres | null {
  return body === null ? null : finished - (body + ease - gap);
}

/**
 * Draws `draft`. Missing measurements, choices out of range, and whatever would give a twisted outline are faults with their
 * names: what comes out can always be laid.
 */
export function drawDraft(draft: Draft, body: Body, values: Readonly<Record<string, unknown>> = {}): Drawn {
  const missing = draft.needs.filter((id) => body[id] === undefined);
  if (missing.length > 0)
    return {
      ok: false,
      faults: missing.map((measurement) => ({
        measurement,
        choice: null,
        message: `${draft.name} can't be drawn without it.`
      }))
    };
  const read = readChoices(draft.choices, values);
  if (read.faults) return { ok: false, faults: read.faults.map(ofChoice) };
  let drafted: Drafted;
  try {
    drafted = draft.draw(body, read.chosen);
  } catch (refusal) {
    if (!(refusal instanceof CannotDraft)) throw refusal;
    const { measurement, choice, message } = refusal;
    return { ok: false, faults: [{ measurement, choice, message }] };
  }
  const faults = drafted.panels.flatMap((panel) => panelFaults(panel));
  if (faults.length > 0) return { ok: false, faults };
  return {
    ok: true,
    result: { ...drafted, walks: drafted.seams.map((seam) => walkSeam(drafted.panels, seam)) }
  };
}

const ofChoice = ({ id, message }: ChoiceFault): DraftFault => ({ measurement: null, choice: id, message });

/** What would keep a panel from being laid: then the measurements don't go together, and the draft is refused as a whole. */
function panelFaults(panel: Panel): DraftFault[] {
  const parsed = panelSchema.safeParse(panel);
  const messages = parsed.success
    ? panelFindings(panel)
        .filter(({ severity }) => severity === 'stops')
        .map(({ message }) => message)
    : [parsed.error.issues[0]?.message ?? 'It is no panel.'];
  return messages.slice(0, 1).map((message) => ({
    measurement: null,
    choice: null,
    message: `With these measurements and choices ${panel.name} can't be drawn: ${message}`
  }));
}
