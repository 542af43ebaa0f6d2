import type { Strip } from '$lib/cloth/strip';
import { place, type Placement } from '$lib/geometry/placement';
import { snap, type Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import type { LayDocument, LayPlacement } from './document';
import { laidShape } from './on-fold';
import { panelOf, type LayPanel, type PanelBook } from './panel-book';

/*
 * Stripes and checks. The points of a match group must fall on one place of the repeat. What counts is the repeat as the garment shows it: on a
 * piece turned end for end both its ways run backwards, on a flipped piece of a mirrored group its way across does.
 */

export type MatchGroup = LayDocument['rules']['matchGroups'][number];

/** A match point on the cloth, and which way the garment reads the repeat there. */
export interface MatchPlace {
  readonly placement: LayPlacement;
  readonly panel: LayPanel;
  readonly name: string;
  readonly at: Point;
  readonly sense: Sense;
}

interface Sense {
  readonly along: 1 | -1;
  readonly across: 1 | -1;
}

/** Which way a garment reads the repeat on a piece that lies so. A piece cut across or on the bias is read as it lies. */
export function senseOf(way: Pick<Placement, 'turn' | 'flip'>, mirrored: boolean): Sense {
  const turned = way.turn > 90 && way.turn <= 270 ? -1 : 1;
  return { along: turned, across: mirrored && way.flip ? (turned === 1 ? -1 : 1) : turned };
}

/** The points of a group that lie on the cloth, locked pieces first, then in the order of the placements. */
export function matchPlaces(
  document: Pick<LayDocument, 'garments' | 'placements' | 'strip'>,
  book: PanelBook,
  group: MatchGroup
): MatchPlace[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const places = document.placements.flatMap((placement) => {
    const wanted = group.points.filter(
      ({ garment, panel }) => garment === placement.garment && panel === placement.panel
    );
    const panel =
      wanted.length > 0 ? panelOf(book, garments.get(placement.garment), placement.panel) : undefined;
    if (!panel) return [];
    const shape = laidShape(panel, placement, document.strip);
    return wanted.flatMap(({ point }): MatchPlace[] => {
      const found = shape.matchPoints.find(({ id }) => id === point);
      return found
        ? [
            {
              placement,
              panel,
              name: found.name,
              at: place(found.at, placement),
              sense: senseOf(placement, group.mirrored)
            }
          ]
        : [];
    });
  });
  return [...places.filter((one) => one.placement.locked), ...places.filter((one) => !one.placement.locked)];
}

/** `length` less whole repeats, −size/2 … size/2. */
export function withinRepeat(length: Millimetres, size: Millimetres): Millimetres {
  const left = length - Math.round(length / size) * size;
  return left === 0 ? 0 : left;
}

/** How far a point must be moved along and across to match another: the least way; 0 where the cloth has no repeat. */
export interface Mismatch {
  readonly along: Millimetres;
  readonly across: Millimetres;
}

type Repeats = Strip['repeat'];

/** What is left to move `member` by so that it falls on the place of the repeat that `anchor` has. */
export function mismatch(
  anchor: Pick<MatchPlace, 'at' | 'sense'>,
  member: Pick<MatchPlace, 'at' | 'sense'>,
  { along, across }: Repeats
): Mismatch {
  const off = (repeat: Repeats['along'], own: Millimetres, other: Millimetres, agree: number): Millimetres =>
    repeat ? withinRepeat(agree * (other - repeat.offset) - (own - repeat.offset), repeat.size) : 0;
  return {
    along: off(along, member.at.x, anchor.at.x, anchor.sense.along * member.sense.along),
    across: off(across, member.at.y, anchor.at.y, anchor.sense.across * member.sense.across)
  };
}

/** Whether this cloth has anything to match. */
export function hasRepeat({ repeat }: Pick<Strip, 'repeat'>): boolean {
  return repeat.along !== null || repeat.across !== null;
}

/**
 * How `placement` is to be moved to the nearest place at which its points match those of the pieces that stay; null where it is in no
 * group, or alone in its groups. `moving` are the pieces that move with it and so can't be matched to.
 */
export function toNextMatch(
  document: LayDocument,
  book: PanelBook,
  placement: LayPlacement,
  moving: ReadonlySet<string>
): Mismatch | null {
  if (!hasRepeat(document.strip)) return null;
  const now = {
    ...document,
    placements: document.placements.map((one) => (one.id === placement.id ? placement : one))
  };
  for (const group of document.rules.matchGroups) {
    const places = matchPlaces(now, book, group);
    const own = places.find((one) => one.placement.id === placement.id);
    const anchor = places.find((one) => one.placement.id !== placement.id && !moving.has(one.placement.id));
    if (own && anchor) return mismatch(anchor, own, document.strip.repeat);
  }
  return null;
}

/** `placement` moved to the nearest place at which it matches; as it is where it matches nothing. */
export function matched(
  document: LayDocument,
  book: PanelBook,
  placement: LayPlacement,
  moving: ReadonlySet<string>
): LayPlacement {
  const by = toNextMatch(document, book, placement, moving);
  return by ? { ...placement, x: snap(placement.x + by.along), y: snap(placement.y + by.across) } : placement;
}
