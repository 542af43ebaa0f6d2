import { endTangents, mapPath, pathLength, placeAt, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import type { Chosen } from '../choices';
import { Construction, joined, straight } from '../construction';
import { add, between, minus, sweep, through } from '../curves';
import { CannotDraft } from '../draft';
import { distanceAtLevel } from '../levels';
import type { Body, PointId } from '../measurement-points';
import { INCH } from './choices';

/*
 * The lines of the bustier on the half front: x out from the centre front, y down from the shoulder line. Common practice of the
 * trade, no published source. Where the hand method leaves something open our reading stands, marked ~ on the sheet.
 */

export interface Levels {
  readonly chest: Millimetres;
  readonly bust: Millimetres;
  readonly underBust: Millimetres;
  readonly waist: Millimetres;
  readonly hem: Millimetres;
  /** Where side seam and back end. */
  readonly sideEnd: Millimetres;
  /** Where the basque ends at the centre front. */
  readonly basque: Millimetres;
}

export interface BustierLines {
  readonly y: Levels;
  /** What the under-bust darts take in on the half. */
  readonly intake: Millimetres;
  readonly hemGirth: Millimetres;
  /** How much longer the side cup's edge was than the centre cup's before it was mended. */
  readonly carried: Millimetres;
  /** Cup edges, top to under-bust, and where the bust point lies on them. */
  readonly innerSeam: Path;
  readonly outerSeam: Path;
  readonly toBustPoint: Millimetres;
  /** From K to the top of the centre cup. */
  readonly innerTop: Path;
  readonly outerTop: Path;
  /** From K to the inner under-bust point, and from Q to the outer one. */
  readonly innerLower: Path;
  readonly outerLower: Path;
  /** With the dart closed: from Q to the side, from there to the hem, and along the basque to the centre front. */
  readonly outerLowerClosed: Path;
  readonly frontTop: Path;
  readonly side: Path;
  /** The closed side down to the full length. */
  readonly wholeSide: Path;
  /** From the side to the blunt end, or to the point at the centre front. */
  readonly basque: Path;
  /** From there to the centre front; null where the basque ends in a point. */
  readonly bluntEnd: Path | null;
  /** Where the closed dart's line starts. */
  readonly under: Point;
  readonly bridge: Point;
}

const DOWN: Point = { x: 0, y: 1 };
const OUT: Point = { x: 1, y: 0 };

/** The basque arrives at most this much steeper than its chord, radians: 12°. */
const STEEPER = Math.PI / 15;

/** How many times steeper than its chord a cup curve leaves: a little more than straight, a sweep without a wave. */
const CUP_BEND = 1.35;

/** Draws the lines of the half front. @throws CannotDraft with the measurement that does not go with the others. */
export function bustierLines(body: Body, chosen: Chosen, sheet: Construction): BustierLines {
  const B = sheet.given('B', 'bust girth', body.bust!);
  const U = sheet.given('U', 'under-bust girth', body.underBust!);
  const W = sheet.given('W', 'waist girth', body.waist!);
  const belowWaist = chosen.number('belowWaist');
  const hemGirth = sheet.given('H', 'girth at the level of the hem', hemGirthOf(body, belowWaist));
  const h = sheet.given('h', 'half the bust span', body.bustSpan! / 2);

  const y = levels(body, chosen, sheet, Math.max(B, hemGirth) / 4 + 2.5 * INCH);
  sheet.guide(
    'Centre front',
    straight({ x: 0, y: 0 }, { x: 0, y: y.basque }),
    'x = 0, from the shoulder line to the end of the basque'
  );
  const tip = sheet.point(
    'tip',
    { x: body.acrossShoulder! / 2, y: INCH },
    'half the shoulder width out, 1 in down for the slope',
    body.acrossShoulder! / 2
  );
  const neck = sheet.point(
    'N',
    { x: chosen.number('neckWidth'), y: 0 },
    'neck width (choice) out on the shoulder line',
    chosen.number('neckWidth')
  );
  need(tip.x - neck.x >= 15, 'acrossShoulder', 'The shoulder is no wider than the neck.');
  const M = sheet.point('M', between(neck, tip, 0.5), 'the middle of the shoulder seam N–tip');
  sheet.guide('Shoulder seam', straight(neck, tip), 'N–tip');
  armhole(sheet, tip, y.chest, B);

  const bustPoint = sheet.point('BP', { x: h, y: y.bust }, '(h, bust point level)');
  sheet.guide(
    'Seam line over the bust',
    straight(M, bustPoint, { x: h, y: y.hem }),
    'straight M–BP; below the bust x = h'
  );

  const { intake, half } = intakeOf(body, y, sheet);
  const dart = sheet.point(
    'D',
    { x: h, y: y.bust + INCH },
    '1 in below BP on the seam line: both cup edges are one from here up to BP'
  );
  sheet.guide(
    'First dart',
    straight({ x: h - INCH / 2, y: y.waist }, dart, { x: h + INCH / 2, y: y.waist }),
    'from D straight to (h ± ½ in, waist)'
  );
  const inner = sheet.point('U1', { x: h - half, y: y.underBust }, 'h − I/2 at the under-bust', h - half);
  const outer = sheet.point('U2', { x: h + half, y: y.underBust }, 'h + I/2 at the under-bust', h + half);
  sheet.line('Inner leg', straight(inner, { x: inner.x, y: y.hem }), {
    formula:
      'from U1 straight down: the legs are parallel, so I is taken at waist and hem too, and they close flat',
    ourReading: true
  });
  sheet.line('Outer leg', straight(outer, { x: outer.x, y: y.hem }), {
    formula: 'from U2 straight down',
    ourReading: true
  });

  const K = sheet.point(
    'K',
    { x: chosen.number('bridge') / 2, y: y.chest },
    'half the bridge out on the chest line; the front keeps the bridge up to here'
  );
  need(
    inner.x - K.x >= 15,
    'bustSpan',
    'The bust points are too near each other for the bridge and the intake.'
  );
  const seams = cupSeams(sheet, {
    M,
    bustPoint,
    dart,
    inner,
    outer,
    K,
    intake,
    y,
    topAbove: chosen.number('topAbove'),
    gape: gapeOf(body, chosen, sheet)
  });
  const side = sideLine(sheet, chosen, y, { B, U, W, H: hemGirth }, intake);
  return {
    y,
    intake,
    hemGirth,
    ...seams,
    ...below(sheet, chosen, y, { seams, side, K, inner, outer, intake }),
    under: inner,
    bridge: K
  };
}

/** Refuses with the measurement to look at. */
function need(holds: boolean, measurement: PointId, message: string): void {
  if (!holds) throw new CannotDraft(measurement, null, message);
}

/** Measured at the hem; else between waist and hip where the hem lies above the hip; else the hip. */
function hemGirthOf(body: Body, belowWaist: Millimetres): Millimetres {
  if (body.hemGirth !== undefined) return body.hemGirth;
  const toHip = body.waistToHip;
  if (toHip === undefined || belowWaist >= toHip) return body.hip!;
  return body.waist! + ((body.hip! - body.waist!) * belowWaist) / toHip;
}

function levels(body: Body, chosen: Chosen, sheet: Construction, wide: Millimetres): Levels {
  const level = (name: string, value: Millimetres, formula: string) =>
    sheet.level(name, value, 0, wide, formula);
  const chest = level('Chest line', body.armscyeDepth!, 'c = armhole depth down from the shoulder line');
  const bust = level('Bust point', body.shoulderToBustPoint!, 'shoulder to bust point');
  need(bust - chest >= 20, 'shoulderToBustPoint', 'The bust point is not far enough below the armhole.');
  const underBust = level('Under-bust', body.shoulderToUnderBust!, 'shoulder to under-bust');
  need(
    underBust - bust >= INCH + 12,
    'shoulderToUnderBust',
    'The under-bust is not far enough below the bust point.'
  );
  const waist = level('Waist', body.shoulderToWaist!, 'shoulder to waist');
  need(waist - underBust >= 20, 'shoulderToWaist', 'The waist is not far enough below the under-bust.');
  const hem = level(
    'Full length',
    waist + chosen.number('belowWaist'),
    'waist + full length below the waist'
  );
  return {
    chest,
    bust,
    underBust,
    waist,
    hem,
    sideEnd: waist + Math.min(chosen.number('sideBelowWaist'), chosen.number('belowWaist') - 20),
    basque: hem + chosen.number('dip')
  };
}

/** Only the chest line of it is used by a strapless garment; it shows where straps and the arm lie. */
function armhole(sheet: Construction, tip: Point, chest: Millimetres, B: Millimetres): void {
  sheet.guide(
    'Armhole depth line',
    straight(tip, { x: tip.x, y: chest }),
    'from the tip straight down to the chest line'
  );
  const middle = sheet.point(
    'A',
    { x: tip.x - INCH / 2, y: (tip.y + chest) / 2 },
    'at half that height, ½ in inwards'
  );
  const end = { x: B / 4, y: chest };
  need(end.x - middle.x >= 10, 'acrossShoulder', 'The shoulders are too wide for a quarter of the bust.');
  sheet.guide('Armhole', through([tip, middle, end], undefined, OUT), 'tip – A – B/4 on the chest line');
}

function intakeOf(body: Body, y: Levels, sheet: Construction): { intake: Millimetres; half: Millimetres } {
  const leg = (INCH / 2) * ((y.underBust - y.bust - INCH) / (y.waist - y.bust - INCH));
  // Common practice, no published source: three quarters from a 43 inch bust.
  const more = body.bust! >= 43 * INCH ? 0.75 * INCH : INCH / 2;
  const half = leg + more;
  sheet.length(
    'Under-bust, out from the leg',
    more,
    'out from each leg of the first dart: ½ in; ¾ in from a bust of 43 in'
  );
  const intake = sheet.length(
    'Intake I',
    2 * half,
    '2 × (½ in × (under-bust − D) / (waist − D) + the step before)'
  );
  return { intake, half };
}

/** More than this on one side of the seam can't be a mere gape: the top would point. */
const MOST_GAPE = 0.9 * INCH;

/** Taken in on each side of the seam at the top, against gaping. */
function gapeOf(body: Body, chosen: Chosen, sheet: Construction): Millimetres {
  const high = body.highBust;
  if (chosen.word('gape') === 'quarter' || high === undefined)
    return sheet.length('Against gaping, g', INCH / 4, '¼ in on each side of the seam at the top');
  const wanted = (body.bust! - high + INCH) / 4;
  return sheet.length('Against gaping, g', Math.max(0, Math.min(MOST_GAPE, wanted)), {
    formula: '(B − high bust + 1 in)/4 on each side of the seam, from 0 to 0.9 in',
    ourReading: true
  });
}

interface CupPlan {
  readonly M: Point;
  readonly bustPoint: Point;
  readonly dart: Point;
  readonly inner: Point;
  readonly outer: Point;
  readonly K: Point;
  readonly intake: Millimetres;
  readonly y: Levels;
  readonly topAbove: Millimetres;
  readonly gape: Millimetres;
}
interface CupSeams {
  readonly innerSeam: Path;
  readonly outerSeam: Path;
  readonly toBustPoint: Millimetres;
  readonly carried: Millimetres;
}

function cupSeams(sheet: Construction, plan: CupPlan): CupSeams {
  const { M, bustPoint, dart, inner, outer, K, intake, y, topAbove, gape } = plan;
  const at = y.chest - topAbove;
  const X = sheet.point(
    'X',
    between(M, bustPoint, (at - M.y) / (bustPoint.y - M.y)),
    'on M–BP, ½ in (choice) above the chest line'
  );
  const T1 = sheet.point(
    'T1',
    add(X, { x: -intake / 3 - gape, y: 0 }),
    'X − I/3 − g: the intake given back, its smaller third towards the centre, then g more against gaping'
  );
  const T2 = sheet.point('T2', add(X, { x: (2 * intake) / 3 + gape, y: 0 }), 'X + 2I/3 + g');
  need(
    T1.x - K.x >= 20,
    'bustSpan',
    'The cups have no width at the top: the bust points are too near each other.'
  );
  const upper = (from: Point) => sweep(from, bent(minus(bustPoint, from), CUP_BEND), bustPoint, DOWN);
  const middle = straight(bustPoint, dart);
  const lower = (to: Point) => sweep(dart, DOWN, to, bent(minus(to, dart), CUP_BEND));
  const first = sheet.line('Centre cup edge', joined(upper(T1), middle, lower(inner)), {
    formula: 'T1 in a curve to BP, straight to D, in a curve to U1',
    ourReading: true
  });
  const second = sheet.line('Side cup edge', joined(upper(T2), middle, lower(outer)), {
    formula: 'T2 in a curve to BP, straight to D, in a curve to U2',
    ourReading: true
  });
  const carried = sheet.length(
    'Edges compared',
    pathLength(second) - pathLength(first),
    'side cup edge − centre cup edge, top to under-bust'
  );
  const innerSeam = carried > 0 ? longerAtTop(first, carried) : first;
  const outerSeam = carried < 0 ? longerAtTop(second, -carried) : second;
  sheet.line(
    carried >= 0 ? 'Centre cup edge, carried up' : 'Side cup edge, carried up',
    carried >= 0 ? innerSeam : outerSeam,
    'the shorter edge goes on upward at the top until both are equal'
  );
  return {
    innerSeam,
    outerSeam,
    carried,
    toBustPoint: pathLength(innerSeam) - INCH - pathLength(lower(inner))
  };
}

/** The direction turned away from the vertical by `times` its own angle, to at most 60°. */
function bent({ x, y }: Point, times: number): Point {
  const angle = Math.max(-Math.PI / 3, Math.min(Math.PI / 3, times * Math.atan2(x, y)));
  return { x: Math.sin(angle), y: Math.cos(angle) };
}

function longerAtTop(path: Path, by: Millimetres): Path {
  if (by < 1e-9) return path;
  const top = add(path.from, endTangents(path).start, -by);
  return joined(straight(top, path.from), path);
}

interface Girths {
  readonly B: Millimetres;
  readonly U: Millimetres;
  readonly W: Millimetres;
  readonly H: Millimetres;
}

/** The side with the dart open, from the chest line to the full length. */
function sideLine(
  sheet: Construction,
  chosen: Chosen,
  y: Levels,
  { B, U, W, H }: Girths,
  intake: Millimetres
): Path {
  const overCups = (B + chosen.number('bustEase') - 2 * intake) / 4;
  const byLevels = chosen.word('sides') === 'levels';
  const point = (name: string, quarter: Millimetres, level: Millimetres, formula: string) =>
    sheet.point(name, { x: quarter + intake, y: level }, formula, quarter + intake);
  const chest = point('S1', B / 4, y.chest, 'B/4 + I on the chest line');
  const between = byLevels
    ? [
        sheet.point(
          'S2',
          { x: overCups + intake, y: y.bust },
          {
            formula:
              '(B + ease over the cups − 2I)/4 + I at the bust point: with I still open there, this is what goes round the bust',
            ourReading: true
          }
        ),
        sheet.point(
          'S3',
          { x: U / 4 + intake, y: y.underBust },
          {
            formula: 'U/4 + I at the under-bust: it holds the garment up',
            ourReading: true
          }
        )
      ]
    : [];
  const waist = point('S4', W / 4, y.waist, 'W/4 + I at the waist');
  const hem = point('S5', H / 4, y.hem, 'H/4 + I at the full length');
  const path = through([chest, ...between, waist, hem], DOWN);
  return sheet.line(
    'Side',
    path,
    'a smooth curve, square to the chest line; 1 in (1½) at the side is its allowance and not part of it'
  );
}

interface Below {
  readonly seams: CupSeams;
  readonly side: Path;
  readonly K: Point;
  readonly inner: Point;
  readonly outer: Point;
  readonly intake: Millimetres;
}

function below(sheet: Construction, chosen: Chosen, y: Levels, plan: Below) {
  const { seams, K, inner, outer, intake } = plan;
  const [top, second] = [seams.innerSeam.from, seams.outerSeam.from];
  const level = y.chest + INCH / 2;
  const sideX = placeAt(plan.side, distanceAtLevel(plan.side, level)).point.x;
  const Q = sheet.point(
    'Q',
    { x: (second.x + sideX) / 2, y: level },
    {
      formula: 'halfway between T2 and the side, ½ in below the chest line',
      ourReading: true
    }
  );
  need(
    Q.x - Math.max(second.x, outer.x) >= 15,
    'bustSpan',
    'The side cup has no width: the bust span is too wide for the bust.'
  );
  const innerEnd = endTangents(seams.innerSeam);
  const outerEnd = endTangents(seams.outerSeam);
  const innerTop = sheet.line(
    'Top of the centre cup',
    sweep(K, roundedUp(K, top, squareTo(innerEnd.start)), top, squareTo(innerEnd.start)),
    { formula: 'from K in a curve to the top, square to the seam', ourReading: true }
  );
  const outerTop = sheet.line('Top of the side cup', sweep(second, squareTo(outerEnd.start), Q, OUT), {
    formula: 'from T2, square to the seam, in a curve to Q',
    ourReading: true
  });
  const innerLower = sheet.line(
    'Lower edge of the centre cup',
    sweep(K, DOWN, inner, squareTo(innerEnd.end), [0.4, 0.4]),
    { formula: 'from K in a curve to U1, square to the seam', ourReading: true }
  );
  const outerLower = sheet.line(
    'Lower edge of the side cup',
    sweep(Q, DOWN, outer, opposite(squareTo(outerEnd.end)), [0.5, 0.45]),
    { formula: 'from Q to U2, bowed out to give the bust room', ourReading: true }
  );
  const closed = (path: Path) => mapPath(path, ({ x, y: down }) => ({ x: x - intake, y: down }));
  const wholeSide = closed(plan.side);
  const frontTop = sheet.guide(
    'Top of the front at the side',
    sweep({ x: Q.x - intake, y: Q.y }, OUT, wholeSide.from, OUT),
    {
      formula: 'dart closed, all beside it moves in by I: from Q along the chest line to the side',
      ourReading: true
    }
  );
  const [side] = splitAt(wholeSide, distanceAtLevel(wholeSide, y.sideEnd));
  sheet.guide(
    'Side with the dart closed',
    side,
    'the side moved in by I: B/4, W/4, H/4; the seam ends below the waist (choice)'
  );
  const waistX = placeAt(wholeSide, distanceAtLevel(wholeSide, y.waist)).point.x;
  need(waistX - inner.x >= 20, 'waist', 'The waist is too small for the bust span.');
  return {
    innerTop,
    outerTop,
    innerLower,
    outerLower,
    outerLowerClosed: closed(outerLower),
    frontTop,
    side,
    wholeSide,
    ...basqueOf(sheet, chosen, y, side)
  };
}

function basqueOf(sheet: Construction, chosen: Chosen, y: Levels, side: Path) {
  const start = placeAt(side, pathLength(side));
  // The back's hem is level: turned by twice the slant of the side, the two make one straight line across the seam.
  const slant = Math.atan2(start.tangent.x, start.tangent.y);
  const leaving = { x: -Math.cos(2 * slant), y: Math.sin(2 * slant) };
  const blunt = chosen.word('basqueEnd') === 'blunt';
  const end = { x: blunt ? Math.min(chosen.number('bluntHalf'), start.point.x / 2) : 0, y: y.basque };
  const chord = Math.atan2(end.y - start.point.y, start.point.x - end.x);
  // An even arc where it can be one; never much steeper than its chord, so that the dip stays a sweep.
  const arriving = Math.min(2 * chord - 2 * slant, chord + STEEPER);
  const curve = sweep(start.point, leaving, end, { x: -Math.cos(arriving), y: Math.sin(arriving) });
  const bottom = blunt ? straight(end, { x: 0, y: y.basque }) : null;
  sheet.line('Basque', bottom ? joined(curve, bottom) : curve, {
    formula: blunt
      ? 'from the end of the side in a curve to the blunt end below the full length; at the side, hem of front and back make a straight line'
      : 'from the end of the side in a curve to the point below the full length; at the side, hem of front and back make a straight line',
    ourReading: true
  });
  return { basque: curve, bluntEnd: bottom };
}

/** The direction in which an even arc leaves `from` that comes to `to` along `arriving`, at least 8° above its chord, at most 60° up. */
function roundedUp(from: Point, to: Point, arriving: Point): Point {
  const chord = Math.atan2(from.y - to.y, to.x - from.x);
  const end = Math.atan2(-arriving.y, arriving.x);
  const angle = Math.min(Math.PI / 3, Math.max(2 * chord - end, chord + (8 * Math.PI) / 180));
  return { x: Math.cos(angle), y: -Math.sin(angle) };
}

const opposite = ({ x, y }: Point): Point => ({ x: -x, y: -y });
/** To the right on the paper, square to a direction that runs down. */
const squareTo = ({ x, y }: Point): Point => ({ x: y, y: -x });
