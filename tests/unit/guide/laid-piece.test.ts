import { describe, expect, it } from 'vitest';
import { openSpread } from '$lib/cloth/strip';
import { area, contains, locate } from '$lib/geometry/polygon';
import { placeLabel } from '$lib/guide/label-place';
import { layPieces, lonePanels, snipDepth } from '$lib/guide/laid-piece';
import { placedCuts, sampleBook, sampleDocument } from './sample-lay';

const document = sampleDocument();
const pieces = layPieces(document, sampleBook);

describe('pieces of a guide', () => {
  it('have the outlines of the revision, to the last bit', () => {
    const cuts = [...placedCuts(document).values()].map((cut) => JSON.stringify(cut));
    expect(pieces.map(({ cut }) => JSON.stringify(cut)).sort()).toEqual(cuts.sort());
  });

  it('are numbered from the cloth’s start', () => {
    expect(pieces.map(({ number }) => number)).toEqual(pieces.map((_, i) => i + 1));
    const starts = pieces.map(({ box }) => box.minX);
    expect(starts).toEqual([...starts].sort((a, b) => a - b));
  });

  it('know their hand: a flip gives the other one, a symmetric piece has none', () => {
    const hands = (panel: string) => pieces.filter((piece) => piece.panel === panel).map(({ hand }) => hand);
    expect(hands('Skirt panel').sort()).toEqual(['left', 'right']);
    expect(hands('Loop')).toEqual(['either']);
  });

  it('give as many as there are plies', () => {
    const layer = { sideUp: 'right', nap: 'along' } as const;
    const three = {
      ...document,
      strip: { ...document.strip, spread: [{ ...openSpread(1480)[0]!, layers: [layer, layer, layer] }] }
    };
    expect(layPieces(three, sampleBook).every(({ copies }) => copies === 3)).toBe(true);
  });

  it('are never left off quietly: a panel that the revision lacks is an error', () => {
    expect(() => layPieces(document, {})).toThrow(/lacks panel/);
  });

  it('are snipped at most half the allowance and 3 mm deep, from the cut edge inwards', () => {
    expect([0, 3, 6, 10, 40].map(snipDepth)).toEqual([0, 1.5, 3, 3, 3]);
    for (const piece of pieces)
      for (const { sew, edge, tip, outward } of piece.notches) {
        const allowance = Math.hypot(edge.x - sew.x, edge.y - sew.y);
        const depth = Math.hypot(tip.x - edge.x, tip.y - edge.y);
        expect(depth).toBeCloseTo(outward ? 3 : snipDepth(allowance), 6);
        expect(locate(piece.cut, tip)).toBe(outward ? 'outside' : 'inside');
      }
  });

  it('without an allowance are marked outside, not snipped', () => {
    const [key, panel] = Object.entries(sampleBook)[0]!;
    const at = { x: 200, y: -10 };
    const shape = { ...panel.shape, notches: [{ from: at, to: at, outward: false }] };
    const only = { ...document, placements: document.placements.filter((one) => key.endsWith(one.panel)) };
    for (const piece of layPieces(only, { [key]: { ...panel, shape } }))
      for (const { tip } of piece.notches) expect(locate(piece.cut, tip)).toBe('outside');
  });
});

describe('panels only', () => {
  it('draws each panel once for each hand, with how many are cut by it', () => {
    const panels = lonePanels(sampleDocument(3), sampleBook);
    expect(panels).toHaveLength(8);
    const pocket = panels.find(({ piece }) => piece.panel.startsWith('Pocket'))!;
    expect(pocket.piece.copies).toBe(6);
    expect(pocket.cuts.map(({ copies }) => copies)).toEqual([2, 2, 2]);
  });

  it('keeps left and right apart: mirrored, of one area, and lying in its own corner', () => {
    const [a, b] = lonePanels(document, sampleBook).filter(({ piece }) => piece.panel === 'Bodice front');
    expect([a!.piece.hand, b!.piece.hand].sort()).toEqual(['left', 'right']);
    expect(area(a!.piece.cut)).toBeCloseTo(area(b!.piece.cut), 6);
    for (const { piece } of [a!, b!]) expect([piece.box.minX, piece.box.minY]).toEqual([0, 0]);
    expect(JSON.stringify(a!.piece.cut)).not.toBe(JSON.stringify(b!.piece.cut));
  });
});

describe('the place of a label', () => {
  const square = [
    { x: 0, y: 0 },
    { x: 100, y: 0 },
    { x: 100, y: 100 },
    { x: 0, y: 100 }
  ];

  it('is the label point when the whole label fits there', () => {
    expect(placeLabel(square, [], { x: 30, y: 40 }, 20, 10)).toEqual({
      centre: { x: 30, y: 40 },
      turn: 0,
      scale: 1
    });
  });

  it('keeps clear of the grain line and shrinks to stay inside', () => {
    const grain = [
      { x: 0, y: 50 },
      { x: 100, y: 50 }
    ];
    const found = placeLabel(square, [grain], { x: 50, y: 50 }, 400, 100);
    const half = { x: 200 * found.scale, y: 50 * found.scale };
    expect(found.scale).toBeGreaterThan(0.1);
    for (const sx of [-1, 1])
      for (const sy of [-1, 1]) {
        const corner = { x: found.centre.x + sx * half.x * 0.999, y: found.centre.y + sy * half.y * 0.999 };
        expect(contains(square, corner)).toBe(true);
        expect(Math.sign(corner.y - 50)).toBe(Math.sign(found.centre.y - 50));
      }
  });

  it('turns along a piece that is long across the warp', () => {
    const tall = square.map(({ x, y }) => ({ x: x / 10, y }));
    expect(placeLabel(tall, [], { x: 5, y: 50 }, 60, 8).turn).toBe(90);
  });
});
