import { placeAt, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { between, lengthOf, solve, sweep, through } from '../curves';
import type { Chosen } from '../choices';
import { joined, straight, type Construction } from '../construction';
import { CannotDraft } from '../draft';
import type { Body } from '../measurement-points';

/*
 * The construction of the bustier on paper: half front, x out from the centre front, y down from the shoulder line. A hand method of the
 * trade; common practice, no published source. Where it leaves a step open, the sheet marks our reading.
 */

export const IN = 25.4;

export interface Frame {
  readonly levels: {
    readonly chest: number;
    readonly bust: number;
    readonly underBust: number;
    readonly waist: number;
    readonly full: number;
    readonly sideEnd: number;
    readonly tip: number;
  };
  /** Intake of the dart at the under-bust and below. */
  readonly intake: number;
  readonly half: number;
  /** Inner and outer cup seam, from the top to the under-bust. */
  readonly innerSeam: Path;
  readonly outerSeam: Path;
  /** Distance along the outer seam of the bust point. */
  readonly bustPoint: { readonly inner: number; readonly outer: number };
  readonly innerTop: Path;
  readonly innerLower: Path;
  readonly outerTop: Path;
  readonly outerLower: Path;
  /** From Q to the side, on the open front. */
  readonly frontTop: Path;
  /** The side of the open front, from the chest line to the end at the basque. */
  readonly side: Path;
  /** From the side to the centre front on the closed front: the basque; the blunt end apart. */
  readonly basque: Path;
  readonly end: Path | null;
  /** How much longer the outer seam came out before the inner one was carried up. */
  readonly carried: number;
}

/** Draws the frame and writes each step. @throws CannotDraft naming the measurement that does not go with the others. */
export function drawFrame(s: Construction, body: Body, chosen: Chosen): Frame {
  const B = s.given('B', 'Bust', body.bust!);
  const W = s.given('W', 'Waist', body.waist!);
  const H = s.given('H', 'Girth at the full length', body.hemGirth ?? body.hip!);
  const h = s.given('h', 'Half the bust span', body.bustSpan! / 2);
  const shoulder = s.given('S', 'Half the shoulder width', body.acrossShoulder! / 2);
  const c = s.given('c', 'Armhole depth', body.armscyeDepth!);
  const reach = Math.max(B, H) / 4 + 3 * IN;
  const level = (name: string, y: number, formula: string) => s.level(name, y, 0, reach, formula);

  level('Shoulder line', 0, '0');
  const chest = level('Chest line', c, 'c');
  const bust = level('Bust line', body.shoulderToBustPoint!, 'shoulder to bust point');
  const underBust = level('Under-bust line', body.shoulderToUnderBust!, 'shoulder to under-bust');
  const waist = level('Waist line', body.shoulderToWaist!, 'shoulder to waist');
  const full = level('Full length', waist + chosen.number('length'), 'waist + length below the waist');
  refuseLevels(chest, bust, underBust, waist);

  const tip = s.point('tip', { x: shoulder, y: IN }, 'S out, 1 in down for the slope');
  const N = s.point('N', { x: chosen.number('neck'), y: 0 }, 'neck width on the shoulder line');
  if (N.x >= tip.x - IN / 2)
    throw new CannotDraft('acrossShoulder', null, 'The shoulders are too narrow for this neck width.');
  const M = s.point('M', between(N, tip, 0.5), 'the middle of N–tip');
  const half = { x: tip.x - 0.5 * IN, y: (tip.y + chest) / 2 };
  const under = s.point('A', { x: B / 4, y: chest }, 'B ÷ 4 on the chest line', B / 4);
  s.guide(
    'Armhole',
    through([tip, half, under], { x: 0, y: 1 }, { x: 1, y: 0 }),
    'tip down, in by ½ in at half height, out to A'
  );

  const P = s.point('P', { x: h, y: bust }, 'h on the bust line');
  s.guide('Seam line over the bust', straight(M, P, { x: h, y: full }), 'M – P, then straight down at h');

  const top = s.point('D', { x: h, y: bust + IN }, '1 in below P');
  s.guide(
    'First dart, inner leg',
    straight(top, { x: h - IN / 2, y: waist }),
    'D – ½ in inside h at the waist'
  );
  s.guide(
    'First dart, outer leg',
    straight(top, { x: h + IN / 2, y: waist }),
    'D – ½ in outside h at the waist'
  );
  const leg = ((underBust - top.y) / (waist - top.y)) * (IN / 2);
  const wider = B >= 43 * IN ? 0.75 * IN : 0.5 * IN;
  const intake = s.length(
    'Intake I',
    2 * (leg + wider),
    `dart at the under-bust + 2 × ${B >= 43 * IN ? '¾' : '½'} in`
  );
  const I = intake;
  const U1 = s.point('U1', { x: h - I / 2, y: underBust }, 'h − I ÷ 2 on the under-bust line');
  const U2 = s.point('U2', { x: h + I / 2, y: underBust }, 'h + I ÷ 2 on the under-bust line');
  s.guide('New inner leg', straight(U1, { x: U1.x, y: full }), {
    formula: 'from U1 straight down',
    ourReading: true
  });
  s.guide('New outer leg', straight(U2, { x: U2.x, y: full }), {
    formula: 'from U2 straight down',
    ourReading: true
  });
  const down = { x: 0, y: 1 };
  const innerCurve = s.line('Lower cup curve, inner', bow(top, down, U1), 'U1 curved up to D');
  const outerCurve = s.line('Lower cup curve, outer', bow(top, down, U2), 'U2 curved up to D');

  const topY = chest - chosen.number('rise');
  if (topY <= M.y + IN / 4)
    throw new CannotDraft(
      'armscyeDepth',
      null,
      'The chest line lies so high that the cups would reach the shoulder.'
    );
  const X = s.point(
    'X',
    between(M, P, (topY - M.y) / (P.y - M.y)),
    'on M – P, above the chest line by the rise'
  );
  const T1 = s.point('T1', { x: X.x - I / 3 - IN / 4, y: X.y }, 'X − I ÷ 3 − ¼ in');
  const T2 = s.point('T2', { x: X.x + (2 * I) / 3 + IN / 4, y: X.y }, 'X + 2 I ÷ 3 + ¼ in');
  const upperInner = arriving(T1, P);
  const upperOuter = arriving(T2, P);
  const middle = straight(P, top);
  const innerLength = lengthOf(upperInner) + IN + lengthOf(innerCurve);
  const outerLength = lengthOf(upperOuter) + IN + lengthOf(outerCurve);
  const carried = s.length(
    'Outer edge of the cups less the inner one',
    outerLength - innerLength,
    'top to under-bust, along the curves'
  );
  const innerRaised = carried > 0.001 ? raised(upperInner, carried) : upperInner;
  const outerRaised = carried < -0.001 ? raised(upperOuter, -carried) : upperOuter;
  const innerSeam = s.line(
    'Edge of the centre cup',
    joined(innerRaised, middle, innerCurve),
    'the shorter one carried upward at the top'
  );
  const outerSeam = s.line(
    'Edge of the side cup',
    joined(outerRaised, middle, outerCurve),
    'as long as the other'
  );
  const t1 = s.point('T1′', innerSeam.from, 'where the centre cup ends now');

  const bridge = chosen.number('bridge') / 2;
  const K = s.point('K', { x: bridge, y: chest }, 'half the bridge on the chest line');
  if (U1.x <= K.x + IN / 4 || T1.x <= K.x + IN / 4)
    throw new CannotDraft(
      'bustSpan',
      null,
      'The bust points lie too near to each other for cups with this bridge.'
    );
  const sideX = B / 4 + I;
  const Q = s.point(
    'Q',
    { x: (T2.x + sideX) / 2, y: chest + IN / 2 },
    {
      formula: 'halfway from T2 to the side, ½ in below the chest line',
      ourReading: true
    }
  );
  if (Q.x <= T2.x + IN / 4 || Q.x <= U2.x)
    throw new CannotDraft(
      'bustSpan',
      null,
      'The bust points lie too far apart for this bust: no side cup is left.'
    );
  const square = (seam: Path): Point => {
    const { tangent } = placeAt(seam, 0);
    return { x: -tangent.y, y: tangent.x };
  };
  const inward = square(innerSeam);
  const innerTop = s.line(
    'Top of the centre cup',
    sweep(t1, inward, K, { x: K.x - t1.x, y: 1.6 * (K.y - t1.y) }),
    'T1′ to K, square to the seam'
  );
  const innerLower = s.line(
    'Lower edge of the centre cup',
    sweep(K, down, U1, { x: 1, y: 0 }, [0.45, 0.4]),
    'K to U1'
  );
  const outward = square(outerSeam);
  const outerTop = s.line(
    'Top of the side cup',
    sweep(outerSeam.from, { x: -outward.x, y: -outward.y }, Q, { x: 1, y: 0 }),
    'T2 to Q, square to the seam'
  );
  const outerLower = s.line(
    'Lower edge of the side cup',
    sweep(U2, { x: 1, y: 0 }, Q, { x: 0.35, y: -1 }, [0.42, 0.4]),
    { formula: 'U2 to Q, bowed out to give the bust room', ourReading: true }
  );

  // Straight down from the chest line, so that the top edges of front and back run into each other.
  const sideFull = through(
    [
      { x: sideX, y: chest },
      { x: W / 4 + I, y: waist },
      { x: H / 4 + I, y: full }
    ],
    down
  );
  s.guide(
    'Side, whole',
    sideFull,
    'B ÷ 4 + I on the chest line, W ÷ 4 + I at the waist, H ÷ 4 + I at the full length'
  );
  const sideEnd = waist + 2 * IN;
  const [side] = splitAt(sideFull, distanceAtLevel(sideFull, sideEnd));
  s.line('Side', side, 'to 2 in below the waist');
  const frontTop = s.line(
    'Top of the front',
    sweep(Q, { x: 1, y: 0 }, { x: sideX, y: chest }, { x: 1, y: 0 }),
    { formula: 'Q to the side on the chest line', ourReading: true }
  );

  const corner = { x: endOf(side).x - I, y: sideEnd };
  const blunt = chosen.word('end') === 'blunt' ? 2 * IN : 0;
  const tipY = full + 3 * IN;
  const point = { x: blunt, y: tipY };
  if (corner.x <= blunt + IN)
    throw new CannotDraft('waist', null, 'The waist is too small for a blunt end of 4 in.');
  const basque = s.line(
    'Basque',
    sweep(corner, onward(side), point, { x: -0.75, y: 1 }, [0.5, 0.35]),
    'from 2 in below the waist at the side, dart closed, to 3 in below the full length'
  );
  const end =
    blunt > 0
      ? s.line('Blunt end', straight(point, { x: 0, y: tipY }), '2 in on the half, 4 in across')
      : null;
  return {
    levels: { chest, bust, underBust, waist, full, sideEnd, tip: tipY },
    intake: I,
    half: h,
    innerSeam,
    outerSeam,
    bustPoint: { inner: lengthOf(innerRaised), outer: lengthOf(outerRaised) },
    innerTop,
    innerLower,
    outerTop,
    outerLower,
    frontTop,
    side,
    basque,
    end,
    carried
  };
}

function refuseLevels(chest: number, bust: number, underBust: number, waist: number): void {
  if (bust < chest + IN / 2)
    throw new CannotDraft(
      'shoulderToBustPoint',
      null,
      'The bust point lies above or on the line of the armhole depth.'
    );
  if (underBust < bust + 1.5 * IN)
    throw new CannotDraft(
      'shoulderToUnderBust',
      null,
      'The under-bust lies less than 1½ in below the bust point: the cups need more height.'
    );
  if (waist < underBust + IN)
    throw new CannotDraft('shoulderToWaist', null, 'The waist lies less than 1 in below the under-bust.');
}

/**
 * Inward along the hem of the front so that it goes on straight from the level hem of the back once the side is sewn: the
 * level, mirrored at the seam.
 */
function onward(side: Path): Point {
  const { tangent } = placeAt(side, lengthOf(side));
  const level = { x: -1, y: 0 };
  const dot = level.x * tangent.x;
  return { x: level.x - 2 * dot * tangent.x, y: level.y - 2 * dot * tangent.y };
}

/** From `from` along `leaving` in one even bow to `to`. */
function bow(from: Point, leaving: Point, to: Point): Path {
  const chord = { x: to.x - from.x, y: to.y - from.y };
  return sweep(from, leaving, to, reflected(leaving, chord));
}

/** From the top of a cup to the bust point, arriving straight down; a little fuller than straight. */
function arriving(from: Point, to: Point): Path {
  const chord = { x: to.x - from.x, y: to.y - from.y };
  const angle = Math.atan2(chord.x, chord.y) * 1.3;
  return sweep(from, { x: Math.sin(angle), y: Math.cos(angle) }, to, { x: 0, y: 1 });
}

/** The direction in which an even bow arrives that leaves along `leaving` over `chord`. */
function reflected(leaving: Point, chord: Point): Point {
  const dot = leaving.x * chord.x + leaving.y * chord.y;
  const size = chord.x * chord.x + chord.y * chord.y;
  return { x: (2 * dot * chord.x) / size - leaving.x, y: (2 * dot * chord.y) / size - leaving.y };
}

/** A path carried on straight before its start. */
function raised(path: Path, by: number): Path {
  const { tangent } = placeAt(path, 0);
  return joined(
    straight({ x: path.from.x - by * tangent.x, y: path.from.y - by * tangent.y }, path.from),
    path
  );
}

const endOf = (path: Path): Point => path.segments[path.segments.length - 1]!.to;

/** How far along a path that runs down it meets level y. */
export function distanceAtLevel(path: Path, y: number): number {
  const found = solve(y, 0, lengthOf(path), (d) => placeAt(path, d).point.y);
  if (found === null) throw new RangeError(`A line of the bustier does not reach ${y}`);
  return found;
}

/** Where a path that runs down meets level y. */
export const crossing = (path: Path, y: number): Point => placeAt(path, distanceAtLevel(path, y)).point;
