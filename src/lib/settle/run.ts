import { z } from 'zod';
import { spreadKind } from '$lib/cloth/spread';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import type { Finding, FindingKind, Verdict } from '$lib/lay/verdict';
import type { Millimetres, Share } from '$lib/units/measure';
import { fromLay, toPlacements, type LaySettle, type SettleReach } from './from-lay';
import { withNeededHands } from './needed-hands';
import type { SettleResult } from './problem';

/*
 * A settle run of a lay: what it is asked, what it tells, how it goes on from its best, and which of its lays may be seen.
 */

/** 'Until stopped' ends here, seconds. */
export const LONGEST_RUN = 1800;

export const settleChoiceSchema = z.object({
  /** How long it may search; null: until it is stopped, at most half an hour. */
  budgetSeconds: z.number().min(2).max(LONGEST_RUN).nullable(),
  from: z.enum(['scratch', 'here']),
  pieces: z.enum(['all', 'loose']),
  /** The selvedge at which pieces lie rather; null: either. */
  side: z.enum(['near', 'far']).nullable().optional(),
  seed: z.int().min(1).max(1_000_000).optional()
});
export type SettleChoice = z.infer<typeof settleChoiceSchema>;

/** The best lay of a run so far; it passed the validator and the lay's own check. */
export interface SettleBest {
  /** Every placement of the lay once it is taken. */
  readonly placements: readonly LayPlacement[];
  /** Greatest x of the placed cut outlines. */
  readonly length: Millimetres;
  readonly efficiency: Share | null;
  /** Pieces that found no place; they hang on the Rail. */
  readonly leftOver: number;
  /** When in the run it was found, seconds. */
  readonly at: number;
}

/** What a run tells of itself, at most once a second, and what it leaves. */
export interface SettleProgress {
  /** How long it has searched, seconds; waiting for its turn does not count. */
  readonly seconds: number;
  /** Positions looked at. */
  readonly evaluations: number;
  /** How often it was taken up. */
  readonly turns: number;
  readonly best: SettleBest | null;
  /** Why it is over; null while it goes on. */
  readonly ended: 'time' | 'least' | 'stopped' | null;
}

/** The lay that `best` makes of `document`. */
export function laidBy(document: LayDocument, best: Pick<SettleBest, 'placements'>): LayDocument {
  return { ...document, placements: [...best.placements] };
}

/** A problem with the way back from its results to the placements of the lay. */
export interface RunProblem {
  readonly settle: LaySettle;
  readonly placementsOf: (result: SettleResult, newId: () => string) => LayPlacement[];
}

/** The problem of a run that begins now, or that goes on from `best`; both are the same problem. */
export function problemOfRun(
  document: LayDocument,
  book: PanelBook,
  choice: Pick<SettleChoice, 'from' | 'pieces' | 'side'>,
  best: Pick<SettleBest, 'placements'> | null
): RunProblem {
  const reach: SettleReach = choice.pieces;
  if (!best) {
    const begun =
      reach === 'all' && spreadKind(document.strip) === 'open' ? withNeededHands(document, book) : document;
    const settle = fromLay(begun, book, { reach, from: choice.from, side: choice.side });
    return { settle, placementsOf: (result, newId) => toPlacements(begun, settle, result, newId) };
  }
  // What stays is locked for the while, so that what the run placed is told apart from what lay there before.
  const before = new Map(document.placements.map((one) => [one.id, one]));
  const stays = (one: LayPlacement): boolean => {
    const was = before.get(one.id);
    return was !== undefined && (was.locked || reach === 'loose');
  };
  const going = laidBy(document, {
    placements: best.placements.map((one) => ({ ...one, locked: stays(one) }))
  });
  const settle = fromLay(going, book, { reach: 'all', from: 'here', side: choice.side });
  return {
    settle,
    placementsOf: (result, newId) =>
      toPlacements(going, settle, result, newId).map((one) => ({
        ...one,
        locked: before.get(one.id)?.locked ?? false
      }))
  };
}

/** More pieces on the cloth, or as many on less of it. */
export function isBetter(a: Pick<SettleBest, 'leftOver' | 'length'>, b: typeof a | null): boolean {
  return (
    b === null ||
    a.leftOver < b.leftOver ||
    // The grid of the product is 0.001 mm: less than that is no gain.
    (a.leftOver === b.leftOver && a.length < b.length - 0.0005)
  );
}

/** Findings of where pieces lie; the others are of what the order asks and can't be changed by laying. */
const ofPlaces: readonly FindingKind[] = [
  'overlap',
  'clearance',
  'outside-width',
  'outside-length',
  'outside-edge',
  'off-grain',
  'against-nap',
  'flaw',
  'straddles',
  'near-fold',
  'mismatch'
];

/**
 * What stops in `after` and is the run's doing: not what was there before between pieces that did not move, not the
 * pieces that it says it left over, and not what the order or the style has wrong.
 */
export function newStops(
  before: { readonly document: LayDocument; readonly verdict: Verdict },
  after: { readonly document: LayDocument; readonly verdict: Verdict },
  leftOver: number
): Finding[] {
  const places = new Set(before.verdict.findings.map(placeKey));
  const counts = new Set(before.verdict.findings.map(countKey));
  const unknown = new Set(
    after.verdict.findings.filter(({ kind }) => kind === 'unknown-panel').map(subjectKey)
  );
  const was = new Map(before.document.placements.map((one) => [one.id, one]));
  const is = new Map(after.document.placements.map((one) => [one.id, one]));
  const unmoved = (id: string): boolean => {
    const a = was.get(id);
    const b = is.get(id);
    return (
      a !== undefined &&
      b !== undefined &&
      a.x === b.x &&
      a.y === b.y &&
      a.turn === b.turn &&
      a.flip === b.flip
    );
  };
  return after.verdict.findings.filter((finding) => {
    if (finding.severity !== 'stops') return false;
    // What was missing before was there to be laid.
    if (finding.kind === 'missing') return leftOver === 0 && !unknown.has(subjectKey(finding));
    if (ofPlaces.includes(finding.kind))
      return !places.has(placeKey(finding)) || !finding.placements.every(unmoved);
    return !counts.has(countKey(finding));
  });
}

const placeKey = ({ kind, placements }: Finding): string => `${kind} ${[...placements].sort().join()}`;
const subjectKey = ({ subject }: Finding): string => (subject ? `${subject.garment} ${subject.panel}` : '');

/** Too many of one panel is one mistake, whichever of its pieces is named, and whatever hand the piece lies as. */
function countKey(finding: Finding): string {
  const kind = finding.kind === 'wrong-hand' ? 'surplus' : finding.kind;
  return `${kind} ${subjectKey(finding)}`;
}
