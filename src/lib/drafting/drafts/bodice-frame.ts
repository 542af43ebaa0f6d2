import { pathLength, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { Chosen } from '../choices';
import { straight, type Construction } from '../construction';
import { add, solve, sweep, through, towards, turned } from '../curves';
import { CannotDraft } from '../draft';
import type { Body } from '../measurement-points';

/*
 * The block of bodice front and back on paper, x out from the centre, y down. Proportions of neck, front height, front width and the bust
 * dart's angle follow the published formulas of the Bunka blocks (as remembered; see tests/reference); widths and lengths are the body's.
 */

export interface BackFrame {
  readonly neck: Path;
  readonly shoulder: Path;
  readonly armhole: Path;
  readonly side: Path;
  readonly waist: Path;
  readonly centre: Path;
  /** Width of the waist dart, 0 for none. */
  readonly dart: number;
  readonly dartAt: number;
  readonly width: number;
}

export interface FrontFrame {
  readonly neck: Path;
  readonly shoulder: Path;
  /** From the shoulder to the bust dart, and from the dart to the underarm. */
  readonly armholeUpper: Path;
  readonly armholeLower: Path;
  readonly side: Path;
  readonly waist: Path;
  readonly centre: Path;
  readonly bustPoint: Point;
  readonly angle: number;
  readonly dart: number;
  readonly dartAt: number;
  readonly width: number;
}

/** Seam ease of the back shoulder; usual half a centimetre to one. From memory. */
export const SHOULDER_EASE = 7;

export function drawBodice(
  s: Construction,
  body: Body,
  chosen: Chosen
): { readonly back: BackFrame; readonly front: FrontFrame } {
  const B = s.given('B', 'Bust', body.bust!);
  const W = s.given('W', 'Waist', body.waist!);
  const nape = s.given('n', 'Back neck point to waist', body.backNeckToWaist!);
  const shoulderLength = s.given('s', 'Shoulder length', body.shoulderLength!);
  const ease = s.given('e', 'Ease at the bust', chosen.number('bustEase'));
  const waistEase = s.given('w', 'Ease at the waist', chosen.number('waistEase'));
  const width = s.length('Half width', B / 2 + ease / 2, 'B ÷ 2 + e ÷ 2');
  const quarter = s.length('Width of front and of back', width / 2, 'half of it');
  const suppression = s.length(
    'To take in at the waist, per half',
    width - (W / 2 + waistEase / 2),
    'half width − (W + w) ÷ 2'
  );
  if (suppression < 0)
    throw new CannotDraft(
      'waist',
      null,
      'The waist is wider than bust and ease: this block can’t widen downward.'
    );
  if (suppression > 200)
    throw new CannotDraft(
      'waist',
      null,
      'More than 20 cm would have to be taken in on each half: measure bust and waist again.'
    );
  const chest = s.level('Chest line', body.armscyeDepth! + 5, 0, width, 'armscye depth + 0.5 cm');
  const waist = s.level('Waist line', nape, 0, width, 'n');
  if (waist < chest + 80)
    throw new CannotDraft('armscyeDepth', null, 'Less than 8 cm are left between chest line and waist.');
  const side = Math.min(0.14 * suppression, 30);
  const backDart = s.length(
    'Back waist dart',
    (suppression - 2 * side) * 0.54,
    '54 % of what the side leaves'
  );
  const frontDart = s.length('Front waist dart', suppression - 2 * side - backDart, 'the rest');

  const back = drawBack(s, {
    B,
    chest,
    waist,
    quarter,
    shoulderLength,
    side,
    dart: backDart,
    backWidth: body.backWidth!
  });
  const front = drawFront(s, {
    B,
    chest,
    waist,
    quarter,
    shoulderLength,
    side,
    dart: frontDart,
    span: body.bustSpan!,
    toBust: body.shoulderToBustPoint!
  });
  return { back, front };
}

interface Common {
  readonly B: number;
  readonly chest: number;
  readonly waist: number;
  readonly quarter: number;
  readonly shoulderLength: number;
  readonly side: number;
  readonly dart: number;
}

/** Where the side meets the waist, and the waist line: as long along its curve as it is meant to be straight across. */
function waistOf({ quarter, side, waist, chest }: Common): { readonly low: Point; readonly line: Path } {
  const under = { x: quarter, y: chest };
  const lineTo = (low: Point) => sweep({ x: 0, y: waist }, { x: 1, y: 0 }, low, squareTo(under, low));
  const wanted = quarter - side;
  const x = solve(wanted, wanted - 20, wanted + 5, (v) => pathLength(lineTo({ x: v, y: waist }))) ?? wanted;
  const low = { x, y: waist };
  return { low, line: lineTo(low) };
}

const slope = (degrees: number): Point => ({
  x: Math.cos((degrees * Math.PI) / 180),
  y: Math.sin((degrees * Math.PI) / 180)
});

function drawBack(s: Construction, given: Common & { readonly backWidth: number }): BackFrame {
  const { B, chest, waist, quarter, shoulderLength } = given;
  const neckWidth = s.length('Back neck width', B / 20 + 29, 'B ÷ 20 + 2.9 cm');
  const napePoint = s.point('nape', { x: 0, y: 0 }, 'the back neck point');
  const neckPoint = s.point(
    'back neck',
    { x: neckWidth, y: -neckWidth / 3 },
    'neck width out, a third of it up'
  );
  const along = slope(18);
  const tip = s.point(
    'back tip',
    add(neckPoint, along, shoulderLength + SHOULDER_EASE),
    's + 0.7 cm ease at 18° below the level',
    shoulderLength + SHOULDER_EASE
  );
  const wide = Math.min(given.backWidth / 2 + 8, quarter - 12);
  const across = s.point(
    'back width',
    { x: wide, y: tip.y + 0.55 * (chest - tip.y) },
    'half the back width + 0.8 cm',
    wide
  );
  const under = s.point('back underarm', { x: quarter, y: chest }, 'on the chest line');
  const neck = s.line(
    'Back neck',
    sweep(napePoint, { x: 1, y: 0 }, neckPoint, square(along), [0.5, 0.25]),
    'square to centre and shoulder'
  );
  const shoulder = s.line('Back shoulder', straight(neckPoint, tip), 's + ease');
  const armhole = s.line(
    'Back armhole',
    through([tip, across, under], square(along, -1), squareTo(under, waistOf(given).low)),
    'square to the shoulder, over the back width, to the underarm'
  );
  const { low, line } = waistOf(given);
  s.point('back waist', low, 'the side taken in', low.x);
  const sideLine = s.line('Back side', straight(under, low), 'underarm to waist');
  const waistLine = s.line('Back waist', line, 'square to centre and side');
  return {
    neck,
    shoulder,
    armhole,
    side: sideLine,
    waist: waistLine,
    centre: straight(napePoint, { x: 0, y: waist }),
    dart: given.dart,
    dartAt: pathLength(waistLine) * 0.48,
    width: quarter
  };
}

function drawFront(
  s: Construction,
  given: Common & { readonly span: number; readonly toBust: number }
): FrontFrame {
  const { B, chest, waist, quarter, shoulderLength } = given;
  const height = s.length('Front height above the chest line', B / 5 + 83, 'B ÷ 5 + 8.3 cm');
  const neckWidth = s.length('Front neck width', B / 24 + 34, 'B ÷ 24 + 3.4 cm');
  const neckPoint = s.point(
    'front neck',
    { x: neckWidth, y: chest - height },
    'front height up, neck width out'
  );
  const pit = s.point(
    'pit of the neck',
    { x: 0, y: neckPoint.y + neckWidth + 5 },
    'neck width + 0.5 cm down'
  );
  const dx = given.span / 2 - neckWidth;
  if (given.toBust <= Math.abs(dx) + 50)
    throw new CannotDraft(
      'shoulderToBustPoint',
      null,
      'The bust point can’t lie so near to the neck with this bust span.'
    );
  const P = s.point(
    'P',
    { x: given.span / 2, y: neckPoint.y + Math.sqrt(given.toBust ** 2 - dx ** 2) },
    'half the bust span out, as far from the neck point as measured'
  );
  if (P.y > waist - 90)
    throw new CannotDraft(
      'shoulderToBustPoint',
      null,
      'The bust point would lie less than 9 cm above the waist.'
    );
  const wide = Math.min(B / 8 + 62, quarter - 12);
  const G = s.point('G', { x: wide, y: chest - 45 }, 'B ÷ 8 + 6.2 cm out, 4.5 cm above the chest line', wide);
  if (G.x <= P.x + 25)
    throw new CannotDraft('bustSpan', null, 'The bust points lie too far apart for this bust.');
  const angle = s.angle('Bust dart', B / 40 - 2.5, 'B ÷ 4 − 2.5 degrees, B in centimetres');
  const upper = s.point('G′', turned(G, P, -angle), 'G turned about P by the dart');
  const along = slope(22);
  const tip = s.point(
    'front tip',
    add(neckPoint, along, shoulderLength),
    's at 22° below the level',
    shoulderLength
  );
  if (tip.y > upper.y - 30)
    throw new CannotDraft('armscyeDepth', null, 'The chest line lies too high for this shoulder.');
  const under = s.point('front underarm', { x: quarter, y: chest }, 'on the chest line');
  const neck = s.line(
    'Front neck',
    sweep(pit, { x: 1, y: 0 }, neckPoint, square(along), [0.55, 0.45]),
    'square to centre and shoulder'
  );
  const shoulder = s.line('Front shoulder', straight(neckPoint, tip), 's');
  // Once the dart is closed the armhole runs on without a corner: the same tangent at G and, turned, at G′.
  const tangent = towards({ x: 0, y: 0 }, { x: quarter - G.x, y: (chest - G.y) * 4 }, 1);
  const armholeLower = s.line(
    'Front armhole, below the dart',
    sweep(G, tangent, under, squareTo(under, waistOf(given).low), [0.4, 0.45]),
    'G to the underarm'
  );
  const armholeUpper = s.line(
    'Front armhole, above the dart',
    sweep(tip, square(along, -1), upper, turned(tangent, { x: 0, y: 0 }, -angle), [0.35, 0.35]),
    'tip to G′, square to the shoulder'
  );
  const { low, line } = waistOf(given);
  s.point('front waist', low, 'the side taken in', low.x);
  const sideLine = s.line('Front side', straight(under, low), 'underarm to waist');
  const waistLine = s.line('Front waist', line, 'square to centre and side');
  const dartAt = solve(P.x, 0, pathLength(waistLine), (d) => d) ?? pathLength(waistLine) / 2;
  if (dartAt + given.dart / 2 > pathLength(waistLine) - 15)
    throw new CannotDraft('bustSpan', null, 'The waist dart below the bust point would run into the side.');
  return {
    neck,
    shoulder,
    armholeUpper,
    armholeLower,
    side: sideLine,
    waist: waistLine,
    centre: straight(pit, { x: 0, y: waist }),
    bustPoint: P,
    angle,
    dart: given.dart,
    dartAt,
    width: quarter
  };
}

/** The whole armhole as it is sewn: what a sleeve has to fit. Front from the underarm up, then back down. */
export function armholeOf(frames: { readonly back: BackFrame; readonly front: FrontFrame }): {
  readonly front: number;
  readonly back: number;
} {
  return {
    front: pathLength(frames.front.armholeUpper) + pathLength(frames.front.armholeLower),
    back: pathLength(frames.back.armhole)
  };
}

/** A quarter turn of a direction: as one sees it, clockwise for +1 … towards the body at the neck end of a shoulder. */
function square({ x, y }: Point, sign = 1): Point {
  return { x: sign * y, y: -sign * x };
}

/** The direction square to a line that runs down. */
const squareTo = (top: Point, low: Point): Point => ({ x: low.y - top.y, y: -(low.x - top.x) });
