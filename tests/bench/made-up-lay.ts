import { noShrinkage } from '../../src/lib/cloth/shrinkage';
import { noSplices } from '../../src/lib/cloth/what-to-buy';
import { openSpread } from '../../src/lib/cloth/strip';
import type { LayDocument, LayPlacement, Need } from '../../src/lib/lay/document';
import { panelKey, type LayPanel } from '../../src/lib/lay/panel-book';
import type { PieceShape } from '../../src/lib/pattern/piece-shape';

/*
 * Made-up lays of any size for benches and tests: garments of rounded, waisted panels, the same for the same seed.
 */

/** Numbers from 0 to 1, the same for the same seed (mulberry32, public domain). */
export function numbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const snap = (value: number): number => Math.round(value * 1000) / 1000 + 0;

/** A panel of `points` points, about `length` × `width` millimetres, narrower in the middle, its origin in the middle. */
export function madeUpShape(
  id: string,
  name: string,
  points: number,
  length: number,
  width: number,
  waist: number
): PieceShape {
  const outline = (inset: number) =>
    Array.from({ length: points }, (_, i) => {
      const angle = (2 * Math.PI * i) / points;
      const square = 1 / Math.max(Math.abs(Math.cos(angle)), Math.abs(Math.sin(angle))) ** 0.7;
      const x = Math.cos(angle) * square * (length / 2 - inset);
      const narrow = 1 - waist * Math.exp(-(((x - length * 0.08) / (length * 0.18)) ** 2));
      return { x: snap(x), y: snap(Math.sin(angle) * square * (width / 2 - inset) * narrow) };
    });
  return {
    panel: id,
    name,
    hand: 'left',
    symmetric: false,
    cut: outline(0),
    sew: outline(10),
    cutOuts: [],
    notches: [{ from: { x: 0, y: 0 }, to: { x: 0, y: 4 }, outward: false }],
    drillHoles: [],
    internalLines: [],
    grain: { from: { x: -length * 0.32, y: 0 }, to: { x: length * 0.32, y: 0 } },
    matchPoints: [],
    label: { x: 0, y: 0 },
    foldLine: null
  };
}

const names = [
  'Front',
  'Back',
  'Side front',
  'Side back',
  'Sleeve',
  'Facing',
  'Collar',
  'Cuff',
  'Pocket',
  'Yoke'
];

export interface MadeUpLay {
  readonly document: LayDocument;
  readonly panels: Record<string, LayPanel>;
}

/**
 * A lay of `pieces` pieces of `points` points each, ten to a garment; `loose` of them hang on the Rail, the others lie
 * in rows on cloth 1.4 m wide.
 */
export function madeUpLay(pieces: number, points: number, loose = 0, seed = 7): MadeUpLay {
  const random = numbers(seed);
  const style = 'made-up';
  const panels: Record<string, LayPanel> = {};
  const sizes = names.map((name, i) => {
    const length = 160 + random() * 520;
    const width = Math.min(length, 90 + random() * 260);
    const id = `panel-${i}`;
    panels[panelKey(style, id)] = {
      shape: madeUpShape(id, name, points, length, width, 0.1 + random() * 0.35),
      role: 'main',
      howMany: 1,
      paired: false,
      turns: 'bothWays',
      grainTolerance: 2,
      grainConfirmed: true
    };
    return { id, length, width };
  });
  const garments = Array.from({ length: Math.ceil(pieces / names.length) }, (_, i) => ({
    id: `garment-${i}`,
    orderItem: 'item',
    styleVersion: style,
    label: `Bodice ${String(36 + 2 * (i % 6))} · ${i + 1}`
  }));
  const needs: Need[] = [];
  const placements: LayPlacement[] = [];
  const width = 1400;
  let [x, y, row] = [0, 0, 0];
  for (let i = 0; i < pieces; i++) {
    const garment = garments[Math.floor(i / names.length)]!.id;
    const size = sizes[i % names.length]!;
    needs.push({ garment, panel: size.id, hand: 'left', count: 1 });
    if (i >= pieces - loose) continue;
    if (y + size.width > width) {
      x += row + 4;
      [y, row] = [0, 0];
    }
    placements.push({
      id: `placement-${i}`,
      panel: size.id,
      garment,
      x: snap(x + size.length * 0.5),
      y: snap(y + size.width * 0.5),
      turn: i % 2 === 0 ? 0 : 180,
      flip: false,
      locked: false
    });
    y += size.width + 4;
    row = Math.max(row, size.length);
  }
  return {
    panels,
    document: {
      schema: 3,
      strip: {
        spread: openSpread(width),
        usableWidth: width,
        fullWidth: 1440,
        length: null,
        nap: 'none',
        sidesAlike: false,
        repeat: { along: null, across: null },
        flaws: [],
        given: null,
        shrinkage: noShrinkage,
        splices: noSplices,
        wholeRepeats: false,
        endAllowance: { start: 20, end: 20 },
        reserve: 0,
        buyStep: 100,
        clearance: 3
      },
      garments,
      needs,
      placements,
      rules: { matchGroups: [], matchTolerance: 1, mayCoverFlaws: [] }
    }
  };
}
