import type { Outline, Point } from '$lib/geometry/point';
import { outside as reachOutside } from '$lib/geometry/outside';
import { growBox } from '$lib/geometry/polygon';
import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import { outlineOf } from '$lib/geometry/prepared';
import { TOUCHING } from '$lib/geometry/tolerance';
import { overhang, sideOn, type StripSide } from './borders';
import type { LayDocument } from './document';
import { CLEARANCE_SLACK } from './findings-between';
import { flawBox, mayCoverFlaws, roomToFlaw } from './flaw-room';
import { hasRepeat } from './matching';
import type { PanelBook } from './panel-book';
import type { PlacedPiece } from './placed';
import { againstNap, beyondTolerance, offGrain, toleranceOn, way } from './turns';
import type { Finding, FindingKind } from './verdict';
import { degrees, millimetres, nameOf } from './wording';

/** What is wrong with a piece by itself: over a border, off grain, against the nap, on a flaw. */
export function findingsEach(
  document: LayDocument,
  book: PanelBook,
  placed: readonly PlacedPiece[]
): Finding[] {
  return [
    ...placed.flatMap((piece) => [
      ...outside(document, book, piece),
      ...overTheEdge(document, book, piece),
      ...turned(document, book, piece),
      ...onFlaws(document, book, piece)
    ]),
    ...unlikeTheirGarment(document, book, placed)
  ];
}

/** A finding of one piece that stops a release. */
function stops(
  piece: PlacedPiece,
  kind: FindingKind,
  measure: Finding['measure'],
  place: Point,
  message: string
): Finding {
  return {
    kind,
    severity: 'stops',
    placements: [piece.placement.id],
    subject: null,
    measure,
    place,
    region: [],
    area: null,
    box: piece.outline.box,
    message
  };
}

function outside(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const over = overhang(piece.outline.box, document.strip);
  return (Object.keys(over) as StripSide[])
    .filter((side) => over[side] > TOUCHING)
    .map((side) =>
      stops(
        piece,
        side === 'near' || side === 'far' ? 'outside-width' : 'outside-length',
        { value: over[side], unit: 'mm' },
        outermost(outlineOf(piece.outline), side),
        `${nameOf(document, book, piece.placement)} hangs ${millimetres(over[side])} over ${sideOn(side, document.strip)}.`
      )
    );
}

/** On an odd remnant: over an edge that is not straight across. */
function overTheEdge(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const edge = document.strip.given?.outline;
  if (!edge) return [];
  const { depth, at } = reachOutside(outlineOf(piece.outline), edge);
  if (depth <= TOUCHING || !at) return [];
  return [
    stops(
      piece,
      'outside-edge',
      { value: depth, unit: 'mm' },
      at,
      `${nameOf(document, book, piece.placement)} hangs ${millimetres(depth)} over the edge of the remnant.`
    )
  ];
}

/** The place of an outline that reaches farthest to a side. */
function outermost(outline: Outline, side: StripSide): Point {
  const reach = {
    start: (p: Point) => -p.x,
    end: (p: Point) => p.x,
    near: (p: Point) => -p.y,
    far: (p: Point) => p.y
  }[side];
  return outline.reduce((best, point) => (reach(point) > reach(best) ? point : best));
}

function turned(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const { panel, placement, outline } = piece;
  const name = nameOf(document, book, placement);
  const findings: Finding[] = [];
  if (beyondTolerance(panel, document.strip, placement.turn)) {
    const off = offGrain(panel, placement.turn);
    findings.push(
      stops(
        piece,
        'off-grain',
        { value: off, unit: 'degrees' },
        outline.inner,
        `${name} lies ${degrees(off)} off grain; its tolerance ${hasRepeat(document.strip) ? 'on stripes and checks ' : ''}is ${degrees(toleranceOn(panel, document.strip))}.`
      )
    );
  }
  if (againstNap(panel, document.strip, placement.turn))
    findings.push(
      stops(
        piece,
        'against-nap',
        null,
        outline.inner,
        document.strip.nap === 'oneWay'
          ? `${name} lies against the nap.`
          : `${name} lies the wrong way round: its panel asks for one way.`
      )
    );
  return findings;
}

/** On cloth where each garment runs one way: the fewer pieces of a garment that run the other way. */
function unlikeTheirGarment(
  document: LayDocument,
  book: PanelBook,
  placed: readonly PlacedPiece[]
): Finding[] {
  if (document.strip.nap !== 'garmentWay') return [];
  return document.garments.flatMap((garment) => {
    const own = placed.filter(({ placement }) => placement.garment === garment.id);
    const runs = (sense: 1 | -1): PlacedPiece[] =>
      own.filter(({ panel, placement }) => way(panel.turns, placement.turn) === sense);
    const [along, against] = [runs(1), runs(-1)];
    const fewer = along.length < against.length ? along : against;
    if (along.length === 0 || against.length === 0) return [];
    return fewer.map((piece) =>
      stops(
        piece,
        'against-nap',
        null,
        piece.outline.inner,
        `${nameOf(document, book, piece.placement)} runs the other way than the rest of its garment.`
      )
    );
  });
}

function onFlaws(document: LayDocument, book: PanelBook, piece: PlacedPiece): Finding[] {
  const { clearance } = document.strip;
  const flaws = flawsAsLaid(document.strip);
  if (flaws.length === 0 || mayCoverFlaws(document, piece.placement)) return [];
  return flaws.flatMap((flaw) => {
    const needed = flaw.radius + clearance;
    const near = growBox(piece.outline.box, needed);
    const box = flawBox(flaw);
    if (box.minX > near.maxX || box.maxX < near.minX || box.minY > near.maxY || box.maxY < near.minY)
      return [];
    const room = roomToFlaw(piece, flaw);
    if (room >= needed - CLEARANCE_SLACK) return [];
    const note = flaw.note === '' ? '' : ` (${flaw.note})`;
    return [
      stops(
        piece,
        'flaw',
        { value: needed - room, unit: 'mm' },
        { x: flaw.x, y: flaw.y },
        room < flaw.radius
          ? `${nameOf(document, book, piece.placement)} lies on a flaw of the cloth${note}.`
          : `${nameOf(document, book, piece.placement)} lies ${millimetres(room - flaw.radius)} from a flaw of the cloth${note}, nearer than the clearance of ${millimetres(clearance)}.`
      )
    ];
  });
}
