import { travel } from '$lib/geometry/contact';
import { snap } from '$lib/geometry/point';
import { area } from '$lib/geometry/polygon';
import { movePrepared, placePrepared, prepare, type PreparedOutline } from '$lib/geometry/prepared';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { loose } from '$lib/lay/needs';
import { panelKey, type PanelBook } from '$lib/lay/panel-book';
import { allowedTurns } from '$lib/lay/turns';
import { flipFor } from '$lib/lay/yields';

/*
 * The demo's lays are placed by the plainest of rules: the largest piece first, each pushed from the open end towards the
 * cloth's start along many tracks, then towards the near selvedge; the track that ends nearest to the start is kept. The
 * same lay comes out every time.
 */

/** How far apart the tracks are, in millimetres. */
const step = 20;

/** `document` with every loose piece placed; nothing that lies already is moved. */
export function placeAll(document: LayDocument, book: PanelBook): LayDocument {
  const { strip } = document;
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const pieces = loose(document, book)
    .map((piece) => {
      const panel = book[panelKey(garments.get(piece.garment)!.styleVersion, piece.panel)]!;
      return { ...piece, rules: panel, size: area(panel.shape.cut) };
    })
    .sort((a, b) => b.size - a.size);
  const lying: PreparedOutline[] = [];
  const placements: LayPlacement[] = pieces.map(({ garment, panel, hand, rules }, i) => {
    const flip = flipFor(hand, rules, strip);
    const prepared = prepare(rules.shape.cut, rules.shape.label);
    const best = (allowedTurns(rules, strip) ?? [0, 90])
      .map((turn) => pushed(placePrepared(prepared, { x: 0, y: 0, turn, flip }), turn, strip, lying))
      .filter((track) => track !== null)
      .sort((a, b) => a.shape.box.maxX - b.shape.box.maxX)[0];
    if (!best) throw new Error(`${rules.shape.name} is wider than its cloth`);
    lying.push(best.shape);
    return {
      id: `p${document.placements.length + i + 1}`,
      panel,
      garment,
      x: best.x,
      y: best.y,
      turn: best.turn,
      flip,
      locked: false
    };
  });
  return { ...document, placements: [...document.placements, ...placements] };
}

/** Where `still` (placed at the origin) comes to lie on its best track; null when the cloth is too narrow for it. */
function pushed(
  still: PreparedOutline,
  turn: number,
  { usableWidth, clearance }: { usableWidth: number; clearance: number },
  lying: readonly PreparedOutline[]
): { x: number; y: number; turn: number; shape: PreparedOutline } | null {
  const { box } = still;
  const room = usableWidth - (box.maxY - box.minY);
  if (room < 0) return null;
  const open = lying.reduce((most, one) => Math.max(most, one.box.maxX), 0) + clearance + 1;
  let best: { x: number; y: number; turn: number; shape: PreparedOutline } | null = null;
  for (let track = 0; track <= room; track += step) {
    let x = Math.ceil((open - box.minX) * 1000) / 1000;
    let y = Math.ceil((track - box.minY) * 1000) / 1000;
    let shape = movePrepared(still, x, y);
    const push = (dx: number, dy: number) => {
      const most = Math.floor((dx === 0 ? shape.box.minY : shape.box.minX) * 1000 + 1e-6) / 1000;
      const far = travel(shape, lying, { x: dx, y: dy }, clearance, Math.max(0, most));
      x = snap(x + dx * far);
      y = snap(y + dy * far);
      shape = movePrepared(still, x, y);
    };
    push(-1, 0);
    push(0, -1);
    push(-1, 0);
    if (!best || shape.box.maxX < best.shape.box.maxX - 1e-9) best = { x, y, turn, shape };
  }
  return best;
}
