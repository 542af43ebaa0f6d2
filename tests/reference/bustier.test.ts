import { beforeAll, describe, expect, it } from 'vitest';
import { bustier } from '$lib/drafting/bustier/bustier';
import { drawDraft, totalOff, type DraftResult } from '$lib/drafting/draft';
import type { Body } from '$lib/drafting/measurement-points';
import { endOf, endTangents, flatten, pathLength, placeAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { edgePath } from '$lib/pattern/flat-edge';
import type { Panel } from '$lib/pattern/panel';

/*
 * The hand method of the bustier, line by line, on its worked example in inches: common practice, no published source. The example gives
 * levels 10, 13, 16 and 22 and a bust span of 7; the girths and the shoulder beside them are ours.
 */

const INCH = 25.4;
const inches = (values: Readonly<Record<string, number>>): Body =>
  Object.fromEntries(Object.entries(values).map(([id, value]) => [id, value * INCH]));
const [B, U, W, H, c] = [36, 31, 28, 38, 7.5];
const example = inches({
  bust: B,
  underBust: U,
  waist: W,
  hip: H,
  acrossShoulder: 15,
  armscyeDepth: c,
  bustSpan: 7,
  shoulderToBustPoint: 10,
  shoulderToUnderBust: 13,
  shoulderToWaist: 16
});

function draw(body: Body = example, choices: Record<string, unknown> = {}): DraftResult {
  const drawn = drawDraft(bustier, body, choices);
  if (!drawn.ok) throw new Error(JSON.stringify(drawn.faults));
  return drawn.result;
}

/** The point of that name on the sheet, inches. */
function point({ sheet }: DraftResult, name: string): Point {
  for (const { marks } of sheet.steps)
    for (const mark of marks)
      if (mark.kind === 'point' && mark.name === name) return { x: mark.at.x / INCH, y: mark.at.y / INCH };
  throw new Error(`No point ${name}`);
}

/** The last line of that name on the sheet, inches. */
function line({ sheet }: DraftResult, name: string): Path {
  const found = sheet.steps
    .flatMap(({ marks }) => marks)
    .filter((mark) => mark.kind === 'path' && mark.name === name)
    .pop();
  if (found?.kind !== 'path') throw new Error(`No line ${name}`);
  const by = ({ x, y }: Point): Point => ({ x: x / INCH, y: y / INCH });
  return {
    from: by(found.path.from),
    segments: found.path.segments.map((segment) =>
      segment.kind === 'line'
        ? { kind: 'line', to: by(segment.to) }
        : { kind: 'cubic', c1: by(segment.c1), c2: by(segment.c2), to: by(segment.to) }
    )
  };
}

/** x at a level of a line that runs down, read off its points, inches. */
function across(path: Path, y: number): number {
  const points = flatten(path, 0.0005);
  const at = points.findIndex((p, i) => i > 0 && (points[i - 1]!.y - y) * (p.y - y) <= 0);
  const [a, b] = [points[at - 1]!, points[at]!];
  return a.y === b.y ? a.x : a.x + ((b.x - a.x) * (y - a.y)) / (b.y - a.y);
}

const panelOf = ({ panels }: DraftResult, id: string): Panel => {
  const panel = panels.find((one) => one.id === id);
  if (!panel) throw new Error(`No panel ${id}`);
  return panel;
};
const edgeOf = (panel: Panel, id: string) => panel.edges.find((edge) => edge.id === id)!;
/** An edge as on paper: inches, y down. */
const edgeLine = (panel: Panel, id: string): Path =>
  edgePath(edgeOf(panel, id), ({ x, y }) => ({ x: x / INCH, y: -y / INCH }));
const bounds = (path: Path) => {
  const points = flatten(path, 0.0005);
  return {
    left: Math.min(...points.map(({ x }) => x)),
    right: Math.max(...points.map(({ x }) => x)),
    top: Math.min(...points.map(({ y }) => y)),
    bottom: Math.max(...points.map(({ y }) => y))
  };
};

const expectAt = (found: Point, x: number, y: number) => {
  expect(found.x).toBeCloseTo(x, 6);
  expect(found.y).toBeCloseTo(y, 6);
};

describe('the bustier by hand: common practice, no published source', () => {
  let drawn: DraftResult;
  let I: number;
  beforeAll(() => {
    drawn = draw();
    const step = drawn.sheet.steps.find(({ title }) => title === 'Intake I')!;
    I = step.value!.kind === 'length' ? step.value!.mm / INCH : NaN;
  });

  it('levels: bust point 10, under-bust 13, waist 16, full length 22', () => {
    for (const [name, y] of [
      ['Chest line', c],
      ['Bust point', 10],
      ['Under-bust', 13],
      ['Waist', 16],
      ['Full length', 22]
    ] as const)
      expect(line(drawn, name).from.y).toBeCloseTo(y, 6);
  });

  it('shoulder: tip at half the shoulder width and 1 down, N on the shoulder line, M their middle', () => {
    expectAt(point(drawn, 'tip'), 7.5, 1);
    expectAt(point(drawn, 'N'), 3, 0);
    expectAt(point(drawn, 'M'), 5.25, 0.5);
    expectAt(point(draw(example, { neckWidth: 4 * INCH }), 'N'), 4, 0);
  });

  it('armhole: straight down to the chest line, at half that height in by ½, out to B/4', () => {
    expectAt(endOf(line(drawn, 'Armhole depth line')), 7.5, c);
    expectAt(point(drawn, 'A'), 7, (1 + c) / 2);
    const armhole = line(drawn, 'Armhole');
    expectAt(armhole.from, 7.5, 1);
    expectAt(endOf(armhole), B / 4, c);
  });

  it('seam line over the bust: straight from M to (h, 10), below it x = h down to the hem', () => {
    const seam = line(drawn, 'Seam line over the bust');
    expectAt(seam.from, 5.25, 0.5);
    expectAt(seam.segments[0]!.to, 3.5, 10);
    expectAt(seam.segments[1]!.to, 3.5, 22);
  });

  it('first dart: from (h, 11) straight to (h ± ½, 16)', () => {
    const dart = line(drawn, 'First dart');
    expectAt(dart.from, 3, 16);
    expectAt(dart.segments[0]!.to, 3.5, 11);
    expectAt(dart.segments[1]!.to, 4, 16);
  });

  it('under-bust: out ½ more from each leg where it crosses 13; the intake comes to about 1½', () => {
    // The leg stands 0.2 from the seam line there: ½ in × 2/5.
    expectAt(point(drawn, 'U1'), 3.5 - 0.7, 13);
    expectAt(point(drawn, 'U2'), 3.5 + 0.7, 13);
    expect(I).toBeCloseTo(1.4, 6);
    expect(Math.abs(I - 1.5)).toBeLessThan(0.15);
  });

  it('¾ instead of ½ for a bust from 43', () => {
    const under = (bust: number) => point(draw({ ...example, bust: bust * INCH }), 'U2').x - 3.5;
    expect(under(42.9)).toBeCloseTo(0.7, 6);
    expect(under(43)).toBeCloseTo(0.95, 6);
  });

  it('new legs straight down to the hem, parallel, so that I is taken at waist and hem too (our reading)', () => {
    for (const [name, x] of [
      ['Inner leg', 2.8],
      ['Outer leg', 4.2]
    ] as const) {
      const leg = line(drawn, name);
      expect(leg.segments.map(({ kind }) => kind)).toEqual(['line']);
      expectAt(leg.from, x, 13);
      expectAt(endOf(leg), x, 22);
      expect(drawn.sheet.steps.find(({ title }) => title === name)!.ourReading).toBe(true);
    }
  });

  it('lower cup curves: both legs curve up to (h, 11) and are one from there to (h, 10)', () => {
    for (const name of ['Centre cup edge', 'Side cup edge']) {
      const edge = line(drawn, name);
      for (const y of [10, 10.25, 10.5, 11]) expect(across(edge, y)).toBeCloseTo(3.5, 4);
    }
    expectAt(endOf(line(drawn, 'Centre cup edge')), 2.8, 13);
    expectAt(endOf(line(drawn, 'Side cup edge')), 4.2, 13);
    // Curved: halfway down they stand off the straight line, each towards the other.
    expect(across(line(drawn, 'Centre cup edge'), 12) - 3.15).toBeGreaterThan(0.02);
    expect(3.85 - across(line(drawn, 'Side cup edge'), 12)).toBeGreaterThan(0.02);
  });

  it('top of the cups: X at c − ½ on M–(h, 10), T1 = X − I/3 − ¼, T2 = X + 2I/3 + ¼', () => {
    const x = 5.25 - (1.75 * (c - 0.5 - 0.5)) / 9.5;
    expectAt(point(drawn, 'X'), x, c - 0.5);
    expectAt(point(drawn, 'T1'), x - I / 3 - 0.25, c - 0.5);
    expectAt(point(drawn, 'T2'), x + (2 * I) / 3 + 0.25, c - 0.5);
    expect(point(draw(example, { topAbove: INCH }), 'X').y).toBeCloseTo(c - 1, 6);
  });

  it('whole edges compared: the side cup comes out longer, about 6½ against 6, and the shorter is carried upward', () => {
    const [centre, side] = [line(drawn, 'Centre cup edge'), line(drawn, 'Side cup edge')];
    expect(Math.abs(pathLength(centre) - 6)).toBeLessThan(0.25);
    expect(Math.abs(pathLength(side) - 6.5)).toBeLessThan(0.25);
    const carried = line(drawn, 'Centre cup edge, carried up');
    expect(pathLength(carried)).toBeCloseTo(pathLength(side), 6);
    expect(carried.from.y).toBeLessThan(centre.from.y - 0.3);
    expect(endOf(carried)).toEqual(endOf(centre));
    const seam = drawn.walks.find(({ seam: { name } }) => name === 'Cup seam')!;
    expect(Math.abs(seam.difference)).toBeLessThan(0.001);
  });

  it('cup edges: K = (½, c), a bridge 1 across that the front keeps up to the chest line', () => {
    expectAt(point(drawn, 'K'), 0.5, c);
    const bridge = bounds(edgeLine(panelOf(drawn, 'front'), 'bridge'));
    expect(bridge.right - bridge.left).toBeCloseTo(0.5, 4);
    expect(bridge.top).toBeCloseTo(c, 4);
    expectAt(line(drawn, 'Lower edge of the centre cup').from, 0.5, c);
    expectAt(endOf(line(drawn, 'Lower edge of the centre cup')), 2.8, 13);
  });

  it('Q halfway between T2 and the side, ½ below the chest line (our reading)', () => {
    const Q = point(drawn, 'Q');
    expect(Q.y).toBeCloseTo(c + 0.5, 6);
    expect(Q.x).toBeCloseTo((point(drawn, 'T2').x + across(line(drawn, 'Side'), c + 0.5)) / 2, 3);
    expect(drawn.sheet.steps.find(({ title }) => title === 'Point Q')!.ourReading).toBe(true);
  });

  it('side cup: T2 to Q, and Q to the outer under-bust point bowed out', () => {
    const Q = point(drawn, 'Q');
    const top = line(drawn, 'Top of the side cup');
    expectAt(endOf(top), Q.x, Q.y);
    const lower = line(drawn, 'Lower edge of the side cup');
    expectAt(lower.from, Q.x, Q.y);
    expectAt(endOf(lower), 4.2, 13);
    const middle = placeAt(lower, pathLength(lower) / 2).point;
    const chord = { x: 4.2 - Q.x, y: 13 - Q.y };
    const off = ((middle.x - Q.x) * chord.y - (middle.y - Q.y) * chord.x) / Math.hypot(chord.x, chord.y);
    expect(off).toBeGreaterThan(0.5);
  });

  it("from Q to the side the front's own top edge runs along the chest line", () => {
    const top = bounds(edgeLine(panelOf(drawn, 'front'), 'top'));
    expect(top.top).toBeCloseTo(c, 3);
    expect(top.bottom).toBeCloseTo(c + 0.5, 3);
    expect(top.right).toBeCloseTo(B / 4, 3);
  });

  it('sides: B/4 + I on the chest line, W/4 + I at the waist, H/4 + I at the hem, smooth; plain or through every level', () => {
    for (const sides of ['levels', 'plain']) {
      const side = line(draw(example, { sides }), 'Side');
      expectAt(side.from, B / 4 + I, c);
      expect(across(side, 16)).toBeCloseTo(W / 4 + I, 4);
      expectAt(endOf(side), H / 4 + I, 22);
      for (let k = 1; k < side.segments.length; k++) {
        const before = endTangents({ from: side.from, segments: side.segments.slice(0, k) }).end;
        const after = endTangents({ from: side.segments[k - 1]!.to, segments: side.segments.slice(k) }).start;
        expect(before.x * after.y - before.y * after.x).toBeCloseTo(0, 6);
      }
    }
    expect(across(line(drawn, 'Side'), 13)).toBeCloseTo(U / 4 + I, 4);
  });

  it('a girth measured at the hem is taken where there is one', () => {
    expect(endOf(line(draw({ ...example, hemGirth: 36 * INCH }), 'Side')).x).toBeCloseTo(9 + I, 6);
  });

  it('the inch at the side (1½ to be safe) is its allowance, not part of the sew line', () => {
    const front = panelOf(drawn, 'front');
    expect(edgeOf(front, 'side').allowance).toBeCloseTo(INCH, 6);
    expect(bounds(edgeLine(front, 'side')).right).toBeCloseTo(B / 4, 3);
    const safe = panelOf(draw(example, { sideAllowance: 1.5 * INCH }), 'front');
    expect(edgeOf(safe, 'side').allowance).toBeCloseTo(1.5 * INCH, 6);
    expect(edgeLine(safe, 'side')).toEqual(edgeLine(front, 'side'));
  });

  it('below the cups the dart is closed: the sides stand at B/4 and W/4, and toward H/4', () => {
    const side = edgeLine(panelOf(drawn, 'front'), 'side');
    expect(bounds(side).right).toBeCloseTo(B / 4, 3);
    expect(across(side, 16)).toBeCloseTo(W / 4, 3);
    expect(across(side, 17.9)).toBeCloseTo(across(line(drawn, 'Side'), 17.9) - I, 3);
    // One panel: both parts of the cup opening meet in the closed dart.
    const front = panelOf(drawn, 'front');
    expect(bounds(edgeLine(front, 'inner-cup')).right).toBeCloseTo(2.8, 3);
    expect(bounds(edgeLine(front, 'outer-cup')).left).toBeCloseTo(2.8, 3);
  });

  it('basque: from 2 below the waist at the side to 3 below the full length at CF, blunt, 4 across', () => {
    const front = panelOf(drawn, 'front');
    const hem = bounds(edgeLine(front, 'hem'));
    expect(hem.top).toBeCloseTo(18, 3);
    expect(hem.bottom).toBeCloseTo(25, 3);
    const end = bounds(edgeLine(front, 'end'));
    expect(end.right - end.left).toBeCloseTo(2, 3);
    const sharp = panelOf(draw(example, { basqueEnd: 'sharp' }), 'front');
    expect(sharp.edges.some(({ id }) => id === 'end')).toBe(false);
    expect(bounds(edgeLine(sharp, 'hem')).left).toBeCloseTo(0, 3);
    expect(bounds(edgeLine(sharp, 'hem')).bottom).toBeCloseTo(25, 3);
  });

  it('at the side seam the hem angles of front and back add up to a straight, and so do those at the top', () => {
    const { angles } = drawn.walks.find(({ seam: { name } }) => name === 'Side')!;
    expect(angles.start).toBeCloseTo(180, 3);
    expect(angles.end).toBeCloseTo(180, 3);
  });

  it('back: no intake, no basque, to 2 below the waist, top and hem straight to CB, CB set in 2 a half', () => {
    const back = panelOf(drawn, 'back');
    const [top, hem, centre] = ['top', 'hem', 'centre'].map((id) => bounds(edgeLine(back, id)));
    expect(top!.top).toBeCloseTo(c, 3);
    expect(top!.bottom).toBeCloseTo(c, 3);
    expect(hem!.top).toBeCloseTo(18, 3);
    expect(hem!.bottom).toBeCloseTo(18, 3);
    expect([centre!.left, centre!.right]).toEqual([2, 2].map((x) => expect.closeTo(x, 3)));
    expect(drawn.totals.every(({ gap }) => Math.abs(gap - 4 * INCH) < 1e-6)).toBe(true);
    expect(edgeLine(back, 'side')).toEqual(edgeLine(panelOf(drawn, 'front'), 'side'));
  });

  it('the set-in is 1½ to 3 a half; no zip allowance, but the turning of its own', () => {
    for (const openingHalf of [1.4 * INCH, 3.1 * INCH])
      expect(drawDraft(bustier, example, { openingHalf }).ok).toBe(false);
    const open = draw(example, { openingHalf: 3 * INCH, backTurning: 15 });
    expect(bounds(edgeLine(panelOf(open, 'back'), 'centre')).left).toBeCloseTo(3, 3);
    expect(edgeOf(panelOf(open, 'back'), 'centre').allowance).toBe(15);
  });

  it('pieces: cups and back in pairs, front on the fold or with a seam; the rest as chosen', () => {
    const plain = draw(example, { lining: false, lacingStrip: false, modesty: false });
    expect(plain.panels.map(({ id, howMany, paired, fold }) => [id, howMany, paired, fold])).toEqual([
      ['centre-cup', 2, true, null],
      ['side-cup', 2, true, null],
      ['front', 1, false, 'centre'],
      ['back', 2, true, null],
      ['loop-strip', expect.any(Number), false, null]
    ]);
    const seamed = panelOf(draw(example, { centreFront: 'seam' }), 'front');
    expect([seamed.fold, seamed.paired, edgeOf(seamed, 'centre').allowance]).toEqual([null, true, 10]);
    const all = draw(example, {
      facing: true,
      lining: true,
      interlining: true,
      foamCups: true,
      lacingStrip: true,
      modesty: true
    });
    const ids = all.panels.map(({ id }) => id);
    for (const id of [
      'front-facing',
      'back-facing',
      'front-lining',
      'back-interlining',
      'centre-cup-foam',
      'lacing-strip',
      'modesty'
    ])
      expect(ids).toContain(id);
    // No allowance where foam butts.
    expect(panelOf(all, 'side-cup-foam').edges.every(({ allowance }) => allowance === 0)).toBe(true);
    // The modesty panel is the opening and 5 cm wide.
    const modesty = bounds(edgeLine(panelOf(all, 'modesty'), 'top'));
    expect((modesty.right - modesty.left) * INCH).toBeCloseTo(4 * INCH + 50, 3);
  });

  it('loops by count and spacing along the centre back, waist stay, channels and bones a centimetre short at each end', () => {
    const back = panelOf(drawn, 'back');
    const places = back.notches
      .filter(({ edge }) => edge === 'centre')
      .map(({ distance }) => distance)
      .sort((a, b) => a - b);
    expect(places.length).toBe(10);
    expect(places[1]! - places[0]!).toBeCloseTo(25, 3);
    const stay = drawn.sheet.steps.find(({ title }) => title === 'Waist stay')!;
    expect(stay.value!.kind === 'length' && stay.value!.mm).toBeCloseTo((W - 4) * INCH + 50, 3);
    expect(drawn.bones.map(({ name, count }) => [name, count])).toEqual([
      ['Centre front', 1],
      ['Under the cup', 2],
      ['Side seam', 2],
      ['Centre back', 2]
    ]);
    expect(drawn.bones[0]!.length).toBeCloseTo((25 - c) * INCH - 20, 3);
    expect(drawn.bones[3]!.length).toBeCloseTo((18 - c) * INCH - 20, 3);
    expect(panelOf(drawn, 'front').internalLines.map(({ note }) => note)).toEqual([
      'Boning channel',
      'Boning channel',
      'Waist stay'
    ]);
  });

  it('checked, as the hand method does not: under-bust, waist and hem as the body asks, the bust over the cups', () => {
    const finished = Object.fromEntries(drawn.totals.map(({ level, finished: mm }) => [level, mm / INCH]));
    expect(finished.underBust).toBeCloseTo(U - 4, 2);
    expect(finished.waist).toBeCloseTo(W - 4, 2);
    expect(finished.hem).toBeCloseTo(H - 4, 2);
    expect(finished.bust).toBeCloseTo(B + 1 - 4, 2);
    // The four quarters against gaping are not given back.
    expect(finished.topEdge).toBeCloseTo(B - 1 - 4, 2);
    expect(drawn.warnings).toEqual([]);
  });

  it('brings the top edge to the high bust where that is chosen', () => {
    const body = { ...example, highBust: 34.5 * INCH };
    const off = (result: DraftResult) => totalOff(result.totals.find(({ level }) => level === 'topEdge')!)!;
    expect(off(draw(body))).toBeCloseTo(1.5 * INCH, 2);
    expect(off(draw(body, { gape: 'highBust' }))).toBeCloseTo(0, 2);
  });

  it('names what is more than 1 cm off, and an under-bust that would hold nothing up', () => {
    const slim = { ...example, underBust: 27 * INCH, waist: 30 * INCH, highBust: 31 * INCH };
    const plain = draw(slim, { sides: 'plain' });
    const under = plain.totals.find(({ level }) => level === 'underBust')!;
    expect(totalOff(under)!).toBeGreaterThan(10);
    expect(plain.warnings.join(' ')).toMatch(/Under-bust: finished .* more than the body/);
    expect(plain.warnings.join(' ')).toMatch(/nothing would hold the bodice up/);
    expect(plain.warnings.join(' ')).toMatch(/Top edge: .* more than the body/);
  });

  it('carries the caution of lacing', () => {
    expect(drawn.cautions.join(' ')).toMatch(/tenth of the waist/);
    expect(drawn.cautions.join(' ')).toMatch(/open quickly/);
  });
});
