import { hasBothSides, napTurned, spreadKind } from '$lib/cloth/spread';
import type { Strip } from '$lib/cloth/strip';
import { TOUCHING } from '$lib/geometry/tolerance';
import type { Millimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import { CLEARANCE_SLACK } from './findings-between';
import { hasRepeat, matchPlaces, mismatch, withinRepeat, type MatchPlace } from './matching';
import { foldUnder } from './on-fold';
import type { PanelBook } from './panel-book';
import type { PlacedPiece } from './placed';
import type { Finding } from './verdict';
import { millimetres, nameOf } from './wording';
import { zoneOf } from './yields';

/** What is wrong between the pieces and the way the cloth is spread: layers, folds, nap, the repeat. */
export function findingsOfSpread(
  document: LayDocument,
  book: PanelBook,
  placed: readonly PlacedPiece[]
): Finding[] {
  return [
    ...napRound(document),
    ...foldOffLine(document),
    ...placed.flatMap((piece) => [...straddles(document, book, piece), ...nearFold(document, book, piece)]),
    ...mismatches(document, book)
  ];
}

const plain = { subject: null, measure: null, place: null, region: [], area: null, box: null } as const;

function napRound({ strip }: LayDocument): Finding[] {
  if (strip.nap === 'none' || !napTurned(strip)) return [];
  const zigZag = spreadKind(strip) === 'faceToFace';
  return [
    {
      ...plain,
      kind: 'spread-nap',
      severity: 'stops',
      placements: [],
      message: zigZag
        ? 'This cloth has a nap, and cloth laid to and fro turns it round in every other ply. Cut the plies and turn every other one.'
        : 'This cloth has a nap, and a crosswise fold turns it round in one layer. Cut the upper layer off and turn it.'
    }
  ];
}

/** How far the nearest line of symmetry of a repeat is from a place: lines lie at its offset and halfway between. */
function offSymmetry(at: Millimetres, repeat: NonNullable<Strip['repeat']['along']>): Millimetres {
  return Math.abs(withinRepeat(at - repeat.offset, repeat.size / 2));
}

/** Two layers that face each other match only where they are folded on a symmetry line of a symmetric repeat. */
function foldOffLine({ strip, rules }: LayDocument): Finding[] {
  if (!hasBothSides(strip) || !hasRepeat(strip)) return [];
  const severity = rules.matchGroups.length > 0 ? 'stops' : 'warns';
  const { along, across } = strip.repeat;
  const foldedAcross = strip.spread[0]!.fold === 'start';
  const mirrors = foldedAcross ? along : across;
  if (!mirrors) return [];
  if (!mirrors.symmetric)
    return [
      {
        ...plain,
        kind: 'repeat',
        severity,
        placements: [],
        offer: 'open-cloth',
        message: `The repeat ${foldedAcross ? 'along' : 'across'} is not symmetric, so its mirror image can’t match: in a layer that faces the other way it runs backwards. Open the cloth and lay a single ply.`
      }
    ];
  if (strip.spread[0]!.fold === 'none') return [];
  const off = offSymmetry(0, mirrors);
  return off <= rules.matchTolerance
    ? []
    : [
        {
          ...plain,
          kind: 'repeat',
          severity,
          placements: [],
          measure: { value: off, unit: 'mm' },
          place: { x: 0, y: 0 },
          message: `The fold lies ${millimetres(off)} off a line of the repeat, so that its layers don’t match. Fold the cloth on a line.`
        }
      ];
}

/** A piece over the border between two zones: one part of it would be cut from more layers than the other. */
function straddles(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const { strip } = document;
  if (strip.spread.length === 1) return [];
  const { minY, maxY } = piece.outline.box;
  const zone = zoneOf(piece.placement, piece.panel, strip);
  const border = (far: boolean): boolean =>
    strip.spread.some((other) => (far ? other.from === zone.to : other.to === zone.from));
  const over = Math.max(border(true) ? maxY - zone.to : 0, border(false) ? zone.from - minY : 0);
  const name = nameOf(document, book, piece.placement);
  const finding = (measure: Millimetres, message: string): Finding => ({
    ...plain,
    kind: 'straddles',
    severity: 'stops',
    placements: [piece.placement.id],
    measure: { value: measure, unit: 'mm' },
    place: piece.outline.inner,
    box: piece.outline.box,
    message
  });
  if (zone.layers.length === 0)
    return [
      finding(
        Math.min(maxY, zone.to) - Math.max(minY, zone.from),
        `${name} lies on the selvedge of the ply that is folded over.`
      )
    ];
  return over > TOUCHING
    ? [
        finding(
          over,
          `${name} lies ${millimetres(over)} over the border between cloth of ${zone.layers.length === 1 ? '1 layer' : `${zone.layers.length} layers`} and what lies beside it.`
        )
      ]
    : [];
}

/** A piece beside a fold, nearer than the clearance: its cut would run into the fold. */
function nearFold(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const { strip } = document;
  const { panel, placement, outline } = piece;
  const zone = zoneOf(placement, panel, strip);
  const on = foldUnder(panel, placement, strip);
  const rooms: [boolean, Millimetres][] = [
    [(zone.fold === 'near' || zone.fold === 'both') && on?.side !== 'near', outline.box.minY - zone.from],
    [(zone.fold === 'far' || zone.fold === 'both') && on?.side !== 'far', zone.to - outline.box.maxY],
    [zone.fold === 'start' && on?.side !== 'start', outline.box.minX]
  ];
  return rooms
    .filter(([folded, room]) => folded && room >= -TOUCHING && room < strip.clearance - CLEARANCE_SLACK)
    .map(([, room]) => ({
      ...plain,
      kind: 'near-fold' as const,
      severity: 'stops' as const,
      placements: [placement.id],
      measure: { value: strip.clearance - room, unit: 'mm' as const },
      place: outline.inner,
      box: outline.box,
      message: `${nameOf(document, book, placement)} lies ${millimetres(Math.max(0, room))} from the fold, ${millimetres(strip.clearance - room)} short of the clearance of ${millimetres(strip.clearance)}.${panel.shape.foldLine ? ' Lay its fold line on the fold, or move it off.' : ''}`
    }));
}

function mismatches(document: LayDocument, book: PanelBook): Finding[] {
  const { strip, rules } = document;
  if (!hasRepeat(strip)) return [];
  return rules.matchGroups.flatMap((group) => {
    const [anchor, ...others] = matchPlaces(document, book, group);
    return anchor ? others.flatMap((other) => offMatch(document, book, anchor, other)) : [];
  });
}

function offMatch(document: LayDocument, book: PanelBook, anchor: MatchPlace, other: MatchPlace): Finding[] {
  const { strip, rules } = document;
  const { along, across } = strip.repeat;
  const name = (one: MatchPlace): string => nameOf(document, book, one.placement);
  const backwards =
    (along && !along.symmetric && anchor.sense.along !== other.sense.along) ||
    (across && !across.symmetric && anchor.sense.across !== other.sense.across);
  const base = {
    ...plain,
    severity: 'stops' as const,
    placements: [other.placement.id, anchor.placement.id],
    place: other.at
  };
  if (backwards)
    return [
      {
        ...base,
        kind: 'repeat',
        message: `${name(other)} shows the repeat the other way round than ${name(anchor)}, and the repeat is not symmetric: they can’t match.`
      }
    ];
  const off = mismatch(anchor, other, strip.repeat);
  const value = Math.max(Math.abs(off.along), Math.abs(off.across));
  if (value <= rules.matchTolerance + 0.001) return [];
  const parts = [
    along ? `${millimetres(Math.abs(off.along))} along` : '',
    across ? `${millimetres(Math.abs(off.across))} across` : ''
  ].filter((part) => part !== '');
  return [
    {
      ...base,
      kind: 'mismatch',
      measure: { value, unit: 'mm' },
      message: `${name(other)} at ${other.name} is off ${name(anchor)} at ${anchor.name} by ${parts.join(' and ')}; ${millimetres(rules.matchTolerance)} is allowed.`
    }
  ];
}
