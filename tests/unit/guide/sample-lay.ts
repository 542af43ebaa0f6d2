import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { noShrinkage } from '$lib/cloth/shrinkage';
import { noSplices } from '$lib/cloth/what-to-buy';
import { openSpread } from '$lib/cloth/strip';
import { placeOutline } from '$lib/geometry/placement';
import { snap, type Outline, type Point } from '$lib/geometry/point';
import { area, boundingBox } from '$lib/geometry/polygon';
import type { GuideFonts } from '$lib/guide/pdf';
import type { GuideInput } from '$lib/guide/guide-input';
import { layDocumentSchema, type LayDocument } from '$lib/lay/document';
import type { LayPanel, PanelBook } from '$lib/lay/panel-book';
import { panelOf } from '$lib/lay/panel-book';
import type { PieceShape } from '$lib/pattern/piece-shape';

/*
 * An invented lay for the guide's tests: asymmetric panels with curves, notches, drill holes and a cut-out.
 */

const require = createRequire(import.meta.url);

/** The fonts that the product prints in. */
export function guideFonts(): GuideFonts {
  const file = (name: string) => readFileSync(require.resolve(`@expo-google-fonts/ibm-plex-sans/${name}`));
  return {
    regular: file('400Regular/IBMPlexSans_400Regular.ttf'),
    bold: file('600SemiBold/IBMPlexSans_600SemiBold.ttf')
  };
}

const p = (x: number, y: number): Point => ({ x: snap(x), y: snap(y) });

/** A cubic curve as points after its start. */
function curve(a: Point, b: Point, c: Point, d: Point, n = 24): Point[] {
  return Array.from({ length: n }, (_, i) => {
    const t = (i + 1) / n;
    const u = 1 - t;
    const mix = (k: 'x' | 'y') => u ** 3 * a[k] + 3 * u * u * t * b[k] + 3 * u * t * t * c[k] + t ** 3 * d[k];
    return p(mix('x'), mix('y'));
  });
}

/** `outline` grown about its middle: good enough for a cut line in a drawing test. */
function grown(outline: Outline, by: number): Point[] {
  const box = boundingBox(outline);
  const cx = (box.minX + box.maxX) / 2;
  const cy = (box.minY + box.maxY) / 2;
  const kx = (box.maxX - box.minX + 2 * by) / (box.maxX - box.minX);
  const ky = (box.maxY - box.minY + 2 * by) / (box.maxY - box.minY);
  return outline.map(({ x, y }) => p(cx + (x - cx) * kx, cy + (y - cy) * ky));
}

function shape(panel: string, name: string, sew: Point[], more: Partial<PieceShape> = {}): PieceShape {
  const box = boundingBox(sew);
  const middle = p((box.minX + box.maxX) / 2, (box.minY + box.maxY) / 2);
  const length = (box.maxX - box.minX) * 0.55;
  return {
    panel,
    name,
    hand: 'left',
    symmetric: false,
    cut: grown(sew, 10),
    sew,
    cutOuts: [],
    notches: [],
    drillHoles: [],
    internalLines: [],
    grain: { from: p(middle.x - length / 2, middle.y), to: p(middle.x + length / 2, middle.y) },
    matchPoints: [],
    label: middle,
    foldLine: null,
    ...more
  };
}

function front(): PieceShape {
  const sew = [
    p(0, 0),
    p(430, 0),
    ...curve(p(430, 0), p(430, 40), p(400, 60), p(395, 90)),
    p(420, 150),
    ...curve(p(420, 150), p(330, 160), p(300, 210), p(290, 250)),
    p(60, 235),
    ...curve(p(60, 235), p(40, 180), p(10, 120), p(0, 60))
  ];
  return shape('front', 'Bodice front', sew, {
    notches: [
      { from: p(200, 0), to: p(200, -10), outward: false },
      { from: p(170, 242.174), to: p(170, 252.6), outward: true }
    ],
    drillHoles: [{ at: p(140, 150), note: 'dart point' }],
    internalLines: [{ points: [p(60, 90), p(140, 150), p(70, 200)], note: 'dart' }],
    label: p(220, 60)
  });
}

function skirt(): PieceShape {
  const sew = [
    p(0, 0),
    p(980, -60),
    ...curve(p(980, -60), p(1010, 150), p(1010, 300), p(960, 520)),
    p(20, 300),
    ...curve(p(20, 300), p(40, 200), p(30, 100), p(0, 0)).slice(0, -1)
  ];
  return shape('skirt', 'Skirt panel', sew, {
    notches: [
      { from: p(490, -30), to: p(489.4, -39.98), outward: false },
      { from: p(500, -30.612), to: p(499.4, -40.59), outward: false }
    ]
  });
}

function sleeve(): PieceShape {
  const sew = [
    p(0, 60),
    p(360, 0),
    ...curve(p(360, 0), p(420, 60), p(500, 120), p(520, 180)),
    ...curve(p(520, 180), p(500, 280), p(420, 330), p(360, 400)),
    p(0, 320)
  ];
  return shape('sleeve', 'Ärmel, Μανίκι, Рукав', sew);
}

function pocket(): PieceShape {
  const sew = [p(0, 0), p(160, 0), p(160, 140), p(80, 160), p(0, 140)];
  return shape('pocket', 'Pocket 中', sew, {
    symmetric: true,
    cutOuts: [[p(60, 100), p(100, 100), p(100, 120), p(60, 120)]]
  });
}

function loop(): PieceShape {
  return shape('loop', 'Loop', [p(0, 0), p(70, 0), p(70, 14), p(0, 14)], { symmetric: true });
}

function entry(one: PieceShape, paired: boolean): LayPanel {
  return {
    shape: one,
    role: 'main',
    howMany: 2,
    paired,
    turns: 'bothWays',
    grainTolerance: 0,
    grainConfirmed: true
  };
}

export const sampleBook: PanelBook = Object.fromEntries(
  [
    entry(front(), true),
    entry(skirt(), true),
    entry(sleeve(), true),
    entry(pocket(), false),
    entry(loop(), false)
  ].map((panel) => [`v1/${panel.shape.panel}`, panel])
);

const where: [string, string, number, number, number, boolean][] = [
  ['skirt', 'g1', 15, 75, 0, false],
  ['skirt', 'g1', 15, 1390, 0, true],
  ['front', 'g1', 1040, 20, 0, false],
  ['front', 'g1', 1040, 570, 0, true],
  ['sleeve', 'g1', 1030, 620, 0, false],
  ['sleeve', 'g1', 1570, 1040, 180, true],
  ['pocket', 'g1', 1505, 40, 0, false],
  ['pocket', 'g1', 1655, 260, 90, false],
  ['loop', 'g1', 30, 620, 3.7, false]
];

/** A lay of the sample's panels, repeated `garments` times along the warp. */
export function sampleDocument(garments = 1, pitch = 1720): LayDocument {
  const ids = Array.from({ length: garments }, (_, i) => `g${i + 1}`);
  return layDocumentSchema.parse({
    schema: 3,
    strip: {
      spread: openSpread(1480),
      usableWidth: 1480,
      fullWidth: 1500,
      length: null,
      nap: 'oneWay',
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
    garments: ids.map((id, i) => ({
      id,
      orderItem: 'i1',
      styleVersion: 'v1',
      label: `Ada dress 38 · ${i + 1}`
    })),
    needs: [],
    placements: ids.flatMap((garment, i) =>
      where.map(([panel, , x, y, turn, flip], k) => ({
        id: `${garment}-${k}`,
        panel,
        garment,
        x: x + i * pitch,
        y,
        turn,
        flip,
        locked: false
      }))
    ),
    rules: { matchGroups: [], matchTolerance: 1, mayCoverFlaws: [] }
  });
}

/** The cut outlines as the revision has them, by placement id. */
export function placedCuts(document: LayDocument, book: PanelBook = sampleBook): Map<string, Point[]> {
  return new Map(
    document.placements.map((placement) => {
      const garment = document.garments.find((one) => one.id === placement.garment);
      return [placement.id, placeOutline(panelOf(book, garment, placement.panel)!.shape.cut, placement)];
    })
  );
}

/** What a guide of `document` is made from. */
export function sampleInput(document = sampleDocument(), more: Partial<GuideInput> = {}): GuideInput {
  const cuts = [...placedCuts(document).values()];
  const lengthUsed = Math.max(0, ...cuts.flat().map(({ x }) => x));
  const total = cuts.reduce((sum, cut) => sum + area(cut), 0);
  return {
    studio: 'Needle & Thimble',
    orderNumber: '27',
    shortName: 'Ada L.',
    lay: 'Day dress, main cloth',
    cloth: 'Wool crêpe, deep green',
    revision: {
      number: 3,
      name: 'after the toile',
      hash: '1a2b3c4d5e6f'.padEnd(64, '0'),
      released: '1 Dec 2026'
    },
    document,
    panels: sampleBook,
    readings: {
      pieces: { needed: cuts.length, placed: cuts.length, loose: 0 },
      lengthUsed,
      area: total,
      efficiency: total / (lengthUsed * document.strip.usableWidth),
      utilisation: 0.6,
      leastLength: { length: 1000, reason: { kind: 'nothing' } },
      clothToBuy: {
        lengthUsed,
        start: 20,
        end: 20,
        furtherPlies: 0,
        splices: 0,
        reserve: 0,
        shrinkage: 0,
        repeats: 0,
        roundedUpTo: 100,
        total: lengthUsed + 40
      }
    },
    scanAddress: 'https://example.test/r/1a2b3c4d5e6f00000000',
    lengthUnit: 'cm',
    made: { words: '1 Dec 2026', at: Date.UTC(2026, 11, 1) },
    ...more
  };
}
