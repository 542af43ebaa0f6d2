import type { Strip } from '$lib/cloth/strip';
import { travel } from '$lib/geometry/contact';
import { clearBy } from '$lib/geometry/distance';
import { snap } from '$lib/geometry/point';
import { area } from '$lib/geometry/polygon';
import { movePrepared, placePrepared, prepare, type PreparedOutline } from '$lib/geometry/prepared';
import type { LayDocument } from '$lib/lay/document';
import { loose } from '$lib/lay/needs';
import { panelKey, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { allowedTurns } from '$lib/lay/turns';
import { flipFor } from '$lib/lay/yields';
import type { Degrees } from '$lib/units/measure';

/*
 * The demo's lays are placed by plain rules: one piece after the other, each tried on tracks along the cloth behind
 * everything that lies already, pushed towards the cloth's start and the near selvedge; the track that ends nearest to the
 * start is kept. Two orders of the pieces are tried, the shortest lay wins. The same lay comes out every time.
 */

/** How far apart the tracks are, in millimetres. */
const step = 15;

interface Hanging {
  readonly garment: string;
  readonly panel: string;
  readonly rules: LayPanel;
  readonly prepared: PreparedOutline;
  readonly flip: boolean;
  readonly turns: readonly Degrees[];
}

interface Lying {
  readonly piece: Hanging;
  readonly x: number;
  readonly y: number;
  readonly turn: Degrees;
  readonly shape: PreparedOutline;
}

/** By area, and by size with length counting most. */
const orders: readonly ((piece: Hanging) => number)[] = [
  ({ rules }) => area(rules.shape.cut),
  ({ prepared: { box } }) => box.maxX - box.minX + (box.maxY - box.minY) / 3
];

/** `document`, on whose cloth nothing lies yet, with every piece placed. Throws when a piece is wider than the cloth. */
export function placeAll(document: LayDocument, book: PanelBook): LayDocument {
  const { strip } = document;
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const pieces = loose(document, book).map(({ garment, panel, hand }): Hanging => {
    const rules = book[panelKey(garments.get(garment)!.styleVersion, panel)]!;
    return {
      garment,
      panel,
      rules,
      prepared: prepare(rules.shape.cut, rules.shape.label),
      flip: flipFor(hand, rules, strip),
      turns: allowedTurns(rules, strip) ?? [0, 90]
    };
  });
  const shortest = orders
    .map((size) =>
      lay(
        [...pieces].sort((a, b) => size(b) - size(a)),
        strip
      )
    )
    .reduce((a, b) => (reach(b) < reach(a) ? b : a));
  return {
    ...document,
    placements: shortest.map(({ piece, x, y, turn }, i) => ({
      id: `p${i + 1}`,
      panel: piece.panel,
      garment: piece.garment,
      x,
      y,
      turn,
      flip: piece.flip,
      locked: false
    }))
  };
}

const reach = (lying: readonly Lying[]) =>
  lying.reduce((most, { shape }) => Math.max(most, shape.box.maxX), 0);

function lay(pieces: readonly Hanging[], strip: Strip): Lying[] {
  const lying: Lying[] = [];
  for (const piece of pieces) {
    const best = piece.turns
      .map((turn) => bestTrack(piece, turn, strip, lying))
      .filter((track) => track !== null)
      .sort((a, b) => a.shape.box.maxX - b.shape.box.maxX)[0];
    if (!best) throw new Error(`${piece.rules.shape.name} is wider than its cloth`);
    lying.push(best);
  }
  return lying;
}

/** Where a piece comes to lie on its best track; null when the cloth is too narrow for it. */
function bestTrack(
  piece: Hanging,
  turn: Degrees,
  { usableWidth, clearance }: Strip,
  lying: readonly Lying[]
): Lying | null {
  const still = placePrepared(piece.prepared, { x: 0, y: 0, turn, flip: piece.flip });
  const { box } = still;
  const room = usableWidth - (box.maxY - box.minY);
  const others = lying.map(({ shape }) => shape);
  // A piece begins at the cloth's start or just behind another one; behind all of them there is always room.
  const starts = [0, ...others.map((other) => other.box.maxX + clearance)].sort((a, b) => a - b);
  let best: Lying | null = null;
  for (let track = 0; track <= room; track += step) {
    let y = Math.ceil((track - box.minY) * 1000) / 1000;
    for (const start of starts) {
      let x = Math.ceil((start - box.minX) * 1000) / 1000;
      let shape = movePrepared(still, x, y);
      if (!others.every((other) => clearBy(shape, other, clearance))) continue;
      for (const [dx, dy] of [
        [-1, 0],
        [0, -1],
        [-1, 0]
      ] as const) {
        const most = Math.floor((dx === 0 ? shape.box.minY : shape.box.minX) * 1000 + 1e-6) / 1000;
        const far = travel(shape, others, { x: dx, y: dy }, clearance, Math.max(0, most));
        x = snap(x + dx * far);
        y = snap(y + dy * far);
        shape = movePrepared(still, x, y);
      }
      if (!best || shape.box.maxX < best.shape.box.maxX - 1e-9) best = { piece, x, y, turn, shape };
      break;
    }
  }
  return best;
}
