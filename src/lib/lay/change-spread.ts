import {
  hasBothSides,
  napTurned,
  spreadKind,
  spreadOf,
  spreadWords,
  type SpreadChoice
} from '$lib/cloth/spread';
import type { Strip } from '$lib/cloth/strip';
import { snap } from '$lib/geometry/point';
import { snapPlacement } from '$lib/geometry/placement';
import type { Millimetres } from '$lib/units/measure';
import { check } from './check';
import type { LayDocument, LayPlacement } from './document';
import { boxOf, type Edit } from './edit';
import { panelOfPlacement } from './needs';
import { foldUnder } from './on-fold';
import type { PanelBook } from './panel-book';
import type { FindingKind } from './verdict';
import { nameOf, pieces } from './wording';
import { zoneOf } from './yields';

/*
 * Spreading the cloth of a lay anew. Opening a lengthwise fold gives exactly the open lay of the same pieces; folding open cloth takes those that
 * lie on the ply beneath. Every other change leaves the pieces where they are and says which no longer fit.
 */

/** What tells that a piece can't stay where it is on another spread. */
const misfits: readonly FindingKind[] = [
  'outside-width',
  'outside-length',
  'straddles',
  'near-fold',
  'surplus',
  'wrong-hand',
  'overlap'
];

/** The lay with its cloth spread as `choice` says; refused where the cloth can't lie so. */
export function changeSpread(document: LayDocument, book: PanelBook, choice: SpreadChoice): Edit {
  const { strip } = document;
  let spread: Strip['spread'];
  try {
    spread = spreadOf(strip, choice);
  } catch (fault) {
    if (fault instanceof RangeError) return { refused: `${fault.message}.` };
    throw fault;
  }
  if (JSON.stringify(spread) === JSON.stringify(strip.spread))
    return { refused: 'The cloth lies so already.' };
  if (strip.nap !== 'none' && choice.kind === 'crosswise' && napTurned({ spread }))
    return {
      refused:
        'A crosswise fold turns the nap of the upper layer round. Cut the upper layer off and turn it, or fold the cloth lengthwise.'
    };
  if (strip.given?.outline && choice.kind !== 'open')
    return { refused: 'An odd remnant lies open: its edge is known for a single ply only.' };

  const next = respread(document, book, spread);
  const before = unfitting(document, book);
  const after = [...unfitting(next, book)].filter((id) => !before.has(id));
  const named = after.slice(0, 3).map((id) =>
    nameOf(
      next,
      book,
      next.placements.find((one) => one.id === id)!
    )
  );
  const more = after.length > named.length ? ` and ${after.length - named.length} more` : '';
  return {
    document: next,
    said: `${spreadWords(next.strip)}.${
      after.length === 0
        ? ''
        : ` No longer fitting where they lie, ${pieces(after.length)}: ${named.join(', ')}${more}.`
    }`
  };
}

/** Ids of the pieces that can't stay where they lie. */
function unfitting(document: LayDocument, book: PanelBook): Set<string> {
  return new Set(
    check(document, book)
      .findings.filter(({ kind }) => misfits.includes(kind))
      .flatMap(({ placements }) => placements)
  );
}

function respread(document: LayDocument, book: PanelBook, spread: Strip['spread']): LayDocument {
  const [from, to] = [spreadKind(document.strip), spreadKind({ spread })];
  if (from === 'lengthwise' && to === 'open') {
    const opened = unfolded(document, book);
    return { ...opened, strip: { ...opened.strip, spread } };
  }
  if (from === 'open' && to === 'lengthwise') return folded(document, book, spread);
  const strip = { ...document.strip, spread };
  return { ...document, strip: hasBothSides(strip) && to === 'lengthwise' ? onLine(strip) : strip };
}

/** The repeat across begins on the fold: a line of it is where the cloth is folded. */
function onLine(strip: Strip): Strip {
  const { across } = strip.repeat;
  return across ? { ...strip, repeat: { ...strip.repeat, across: { ...across, offset: 0 } } } : strip;
}

/** `length` in 0 … size. */
function modulo(length: Millimetres, size: Millimetres): Millimetres {
  return snap(((length % size) + size) % size);
}

/**
 * A lay on lengthwise folded cloth as it looks once the cloth is opened, the ply beneath staying where it is: every placement of the
 * doubled cloth and its mirror image beyond the fold; a piece on the fold becomes whole.
 */
export function unfolded(document: LayDocument, book: PanelBook): LayDocument {
  const { strip } = document;
  const [doubled] = strip.spread;
  const depth = doubled!.to;
  const taken = new Set(document.placements.map(({ id }) => id));
  const placements = document.placements.flatMap((one): LayPlacement[] => {
    const moved = { ...one, ...snapPlacement({ ...one, y: depth + one.y }) };
    const panel = panelOfPlacement(document, book, one);
    if (!panel || foldUnder(panel, one, strip) || zoneOf(one, panel, strip) !== doubled) return [moved];
    return [
      moved,
      {
        ...one,
        id: freeId(one.id, taken),
        ...snapPlacement({ x: one.x, y: depth - one.y, turn: -one.turn, flip: !one.flip })
      }
    ];
  });
  const { across } = strip.repeat;
  return {
    ...document,
    placements,
    strip: {
      ...strip,
      spread: spreadOf(strip, {
        kind: 'open',
        sideUp: doubled!.layers[1]!.sideUp,
        depth: null,
        plies: 2,
        turned: true
      }),
      repeat: {
        ...strip.repeat,
        across: across && { ...across, offset: modulo(across.offset + depth, across.size) }
      },
      flaws: movedFlaws(strip, depth)
    }
  };
}

/** Flaws noted as they lie go with the ply beneath; those of a measured length are told from its own selvedge anyway. */
function movedFlaws({ flaws, given }: Strip, by: Millimetres): Strip['flaws'] {
  return given ? flaws : flaws.map((flaw) => ({ ...flaw, y: snap(flaw.y + by) }));
}

function freeId(id: string, taken: Set<string>): string {
  let next = `${id.slice(0, 56)}-over`;
  for (let i = 2; taken.has(next); i++) next = `${id.slice(0, 54)}-over${i}`;
  taken.add(next);
  return next;
}

/** A lay on open cloth once it is folded lengthwise: pieces of the ply that comes to lie on top are taken off the cloth. */
function folded(document: LayDocument, book: PanelBook, spread: Strip['spread']): LayDocument {
  const depth = spread[0]!.to;
  const { strip } = document;
  return {
    ...document,
    placements: document.placements.flatMap((one) => {
      const moved = { ...one, ...snapPlacement({ ...one, y: one.y - depth }) };
      const panel = panelOfPlacement(document, book, one);
      return panel && !one.locked && boxOf(panel, moved).maxY <= 0 ? [] : [moved];
    }),
    strip: onLine({ ...strip, spread, flaws: movedFlaws(strip, -depth) })
  };
}
