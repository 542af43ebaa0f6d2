import { pathLength, placeAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { length, amount } from '../choices';
import { Construction, straight } from '../construction';
import { solve, sweep, through } from '../curves';
import { CannotDraft, type Draft } from '../draft';
import { INLAY, Pieces } from '../pieces';
import { armholeNotches, bodiceChoices } from './bodice-block';
import { armholeOf, drawBodice } from './bodice-frame';

/*
 * Sleeve block to the armhole of the bodice block for the same body: cap height a share of the armhole, cap as long as the armhole and
 * its ease, notches at the same distances from the underarm as the bodice's, so that all ease lies over the shoulder.
 */

export const sleeveBlock: Draft = {
  id: 'sleeve-block',
  version: 1,
  name: 'Sleeve block',
  about:
    'A straight sleeve for the bodice block of the same measurements, or for an armhole that is typed. Usual cap ease is 2 to 4 cm in wool, less in firm cotton.',
  needs: [
    'bust',
    'waist',
    'backNeckToWaist',
    'shoulderLength',
    'armscyeDepth',
    'backWidth',
    'bustSpan',
    'shoulderToBustPoint',
    'upperArm',
    'armLength',
    'wrist'
  ],
  mayUse: ['elbow'],
  choices: [
    length(
      'armhole',
      'Armhole',
      '0: that of the bodice block for these measurements; else the armhole as measured on the bodice.',
      {
        default: 0,
        min: 0,
        max: 800
      }
    ),
    length('capEase', 'Ease of the cap', 'How much longer the cap is than the armhole.', {
      default: 25,
      min: 0,
      max: 45
    }),
    amount('cap', 'Cap height', 'As a share of the armhole: higher is closer, lower moves more freely.', {
      default: 31,
      min: 24,
      max: 36,
      unit: '%'
    }),
    length('wristEase', 'Ease at the wrist', 'Added to the wrist so that the hand passes.', {
      default: 70,
      min: 40,
      max: 160
    }),
    ...bodiceChoices,
    length('hem', 'Hem allowance', 'Turned up at the wrist.', { default: 30, min: 10, max: 60 })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const typed = chosen.number('armhole');
    const own = armholeOf(drawBodice(new Construction(), body, chosen));
    const parts = typed > 0 ? { front: typed * 0.48, back: typed * 0.52 } : own;
    if (typed > 0 && typed < 280)
      throw new CannotDraft(null, 'armhole', 'An armhole under 28 cm is none for a grown body.');
    const AH = s.given(
      'AH',
      typed > 0 ? 'Armhole, typed' : 'Armhole of the bodice block',
      parts.front + parts.back
    );
    const A = s.given('A', 'Upper arm', body.upperArm!);
    const L = s.given('L', 'Arm length', body.armLength!);
    const wrist = s.length('Width at the wrist', body.wrist! + chosen.number('wristEase'), 'wrist + ease');
    const cap = s.length('Cap height', (AH * chosen.number('cap')) / 100, 'AH × its share');
    if (L < cap + 150) throw new CannotDraft('armLength', null, 'The arm is too short for this cap.');
    const ease = chosen.number('capEase');
    const frontLength = parts.front + ease / 2;
    const backLength = parts.back + ease / 2;
    const top = s.point('top', { x: 0, y: 0 }, 'the top of the cap');
    // The cap meets the underarm square, and the underarm leans as the width asks: found by turns, which settle at once.
    let across = parts.front + parts.back;
    let frontHalf: number | null = null;
    let backHalf: number | null = null;
    const half = (x: number, which: 'front' | 'back') =>
      capCurve(top, { x, y: cap }, { x: L - cap, y: (across - wrist) / 2 }, which);
    for (let turn = 0; turn < 8; turn++) {
      frontHalf = solve(frontLength, 10, 400, (x) => pathLength(half(x, 'front')));
      backHalf = solve(backLength, 10, 400, (x) => pathLength(half(x, 'back')));
      if (frontHalf === null || backHalf === null) break;
      across = frontHalf + backHalf;
    }
    if (frontHalf === null || backHalf === null)
      throw new CannotDraft(
        null,
        'cap',
        'No cap of this height is as long as the armhole: choose a lower one.'
      );
    const under = {
      front: s.point('front underarm', { x: frontHalf, y: cap }, 'as far out as the cap is long', frontHalf),
      back: s.point('back underarm', { x: -backHalf, y: cap }, 'as far out as the cap is long', backHalf)
    };
    const width = s.length('Width at the upper arm', frontHalf + backHalf, 'front + back');
    if (width < A + 15)
      throw new CannotDraft(
        'upperArm',
        null,
        'The sleeve would be less than 1.5 cm wider than the upper arm: choose a lower cap, or a larger armhole.'
      );
    const front = s.line('Cap, front', half(frontHalf, 'front'), 'front armhole + half the ease');
    const back = s.line('Cap, back', mirrored(half(backHalf, 'back')), 'back armhole + half the ease');
    const elbow = s.level(
      'Elbow line',
      cap + (L - cap) * 0.46,
      -backHalf,
      frontHalf,
      'a little above the middle of the underarm'
    );
    const middle = (frontHalf - backHalf) / 2;
    const low = {
      front: s.point('front wrist', { x: middle + wrist / 2, y: L }, 'half the width from the middle'),
      back: s.point('back wrist', { x: middle - wrist / 2, y: L }, 'half the width from the middle')
    };
    if (wrist > width)
      throw new CannotDraft('wrist', null, 'The wrist with its ease would be wider than the upper arm.');
    const frontSide = s.line('Underarm, front', straight(under.front, low.front), 'underarm to wrist');
    const backSide = s.line('Underarm, back', straight(under.back, low.back), 'underarm to wrist');
    const out = { x: low.front.y - under.front.y, y: under.front.x - low.front.x };
    const hem = s.line(
      'Wrist',
      sweep(low.back, { x: out.x, y: -out.y }, low.front, out),
      'square to both underarms'
    );
    const pieces = new Pieces();
    const frontSize = pathLength(front);
    const backSize = pathLength(back);
    pieces.piece({
      id: 'sleeve',
      name: 'Sleeve',
      hand: 'left',
      paired: true,
      grain: [
        { x: middle, y: cap * 0.6 },
        { x: middle, y: L - 60 }
      ],
      edges: [
        { id: 'cap-front', path: front, notches: [frontSize - armholeNotches.front] },
        { id: 'front', path: frontSide, allowance: INLAY / 1.25, notches: [elbow - cap] },
        { id: 'hem', path: hem, backward: true, role: 'hem', allowance: chosen.number('hem') },
        { id: 'back', path: backSide, backward: true, allowance: INLAY / 1.25, notches: [elbow - cap] },
        {
          id: 'cap-back',
          path: back,
          backward: true,
          notches: [backSize - armholeNotches.back, backSize - armholeNotches.back + 8]
        }
      ],
      lines: [
        { path: straight({ x: -backHalf, y: cap }, { x: frontHalf, y: cap }), note: 'Upper arm' },
        { path: straight(at(backSide, elbow), at(frontSide, elbow)), note: 'Elbow' }
      ],
      note: 'Two notches: back. All ease lies between the notches, over the shoulder.'
    });
    pieces.seam('Underarm', ['sleeve', 'front'], ['sleeve', 'back'], { smooth: ['start', 'end'] });
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [
        { level: 'armhole', body: AH, ease, gap: 0, finished: frontSize + backSize },
        { level: 'upperArm', body: A, ease: width - A, gap: 0, finished: width }
      ],
      bones: [],
      supplies: [],
      warnings:
        width > A + 90
          ? ['The sleeve is more than 9 cm wider than the upper arm: a higher cap would be closer.']
          : [],
      cautions: []
    };
  }
};

/** Half of the cap from its top to the underarm at x ≥ 0: level at the top, square to the underarm below, hollow towards the underarm, the front a little more. */
function capCurve(top: Point, under: Point, arriving: Point, which: 'front' | 'back'): Path {
  const [hollow, full] = which === 'front' ? [0.035, 0.05] : [0.02, 0.06];
  const { x, y } = under;
  const size = Math.hypot(x, y);
  const off = (share: number, by: number): Point => ({
    x: top.x + x * share + (by * size * y) / size,
    y: top.y + y * share - (by * size * x) / size
  });
  return through([top, off(0.33, full), off(0.74, -hollow), under], { x: 1, y: 0 }, arriving);
}

const mirrored = (path: Path): Path => ({
  from: { x: -path.from.x, y: path.from.y },
  segments: path.segments.map((segment) =>
    segment.kind === 'line'
      ? { kind: 'line', to: { x: -segment.to.x, y: segment.to.y } }
      : {
          kind: 'cubic',
          c1: { x: -segment.c1.x, y: segment.c1.y },
          c2: { x: -segment.c2.x, y: segment.c2.y },
          to: { x: -segment.to.x, y: segment.to.y }
        }
  )
});

/** Where a straight side meets a level. */
function at(side: Path, y: number): Point {
  const end = placeAt(side, pathLength(side)).point;
  const share = (y - side.from.y) / (end.y - side.from.y);
  return { x: side.from.x + share * (end.x - side.from.x), y };
}
