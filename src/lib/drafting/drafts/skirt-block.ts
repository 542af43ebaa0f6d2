import { pathLength } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { length, oneOf, yesNo } from '../choices';
import { Construction, joined, straight } from '../construction';
import { solve, sweep } from '../curves';
import { dartInto, type Dart } from '../darts';
import { CannotDraft, type Draft } from '../draft';
import { INLAY, Pieces, SEAM } from '../pieces';

/*
 * Skirt block after the handout for drafting a skirt block of WikiEducator (an open teaching text): half width hip ÷ 2 + 2.5 cm, back
 * hip half of it + 0.75, waist a quarter + dart 2 (+ 1.2 at the back), raised 1 at the side, darts 12 and 10 long.
 */

interface Half {
  readonly waist: Dart;
  readonly side: ReturnType<typeof joined>;
  readonly hem: ReturnType<typeof straight>;
  readonly centre: ReturnType<typeof straight>;
  readonly hip: number;
}

interface Lines {
  readonly top: Point;
  readonly side: ReturnType<typeof sweep>;
  readonly waist: ReturnType<typeof sweep>;
  readonly hipPoint: Point;
  readonly hemPoint: Point;
  readonly down: Point;
}

export const skirtBlock: Draft = {
  id: 'skirt-block',
  version: 1,
  name: 'Skirt block',
  about:
    'A straight skirt with one dart to each quarter, after the handout for drafting a skirt block of WikiEducator, an open teaching text.',
  needs: ['waist', 'hip', 'waistToHip'],
  mayUse: ['waistToKnee'],
  choices: [
    length('length', 'Length', 'From the waist to the hem.', { default: 600, min: 300, max: 1100 }),
    length('ease', 'Ease at the hip', 'Added to the whole hip.', { default: 50, min: 20, max: 100 }),
    length('flare', 'Flare at the hem', 'How far each side seam runs out at the hem; 0 is straight.', {
      default: 0,
      min: 0,
      max: 80
    }),
    oneOf('back', 'Centre back', 'A seam to open at, or the fold.', [
      ['seam', 'With a seam'],
      ['fold', 'On the fold']
    ]),
    yesNo('slit', 'Slit in the centre back', 'A slit to walk in, with its turnings.', false),
    length('hem', 'Hem allowance', 'Turned up at the hem.', { default: 40, min: 10, max: 100 })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const W = s.given('W', 'Waist', body.waist!);
    const H = s.given('H', 'Hip', body.hip!);
    const depth = s.given('d', 'Waist to hip', body.waistToHip!);
    const L = s.given('L', 'Length', chosen.number('length'));
    if (depth >= L - 50)
      throw new CannotDraft(null, 'length', 'The skirt ends at the hip or above: choose a longer one.');
    const width = s.length('Half width', H / 2 + chosen.number('ease') / 2, 'H ÷ 2 + half the ease');
    const backHip = s.length('Back hip', width / 2 + 7.5, 'half the half width + 0.75 cm');
    const frontHip = s.length('Front hip', width - backHip, 'half width − back hip');
    const backWaist = s.length('Back waist with its dart', W / 4 + 20 + 12, 'W ÷ 4 + 2 dart + 1.2 ease');
    const frontWaist = s.length('Front waist with its dart', W / 4 + 20, 'W ÷ 4 + 2 dart');
    if (backWaist > backHip + 60 || frontWaist > frontHip + 60)
      throw new CannotDraft(
        'waist',
        null,
        'The waist is so much wider than the hip that the side would lean outward.'
      );
    const flare = chosen.number('flare');
    const lines = (hip: number, waist: number, raise: number): Lines => {
      const corner = { x: 0, y: 0 };
      const hipPoint = { x: hip, y: depth };
      const down: Point = { x: flare, y: L - depth };
      const at = (x: number) => {
        const top = { x, y: -raise };
        const side = sweep(top, { x: (hip - x) * 1.4, y: depth }, hipPoint, down, [0.3, 0.35]);
        return { top, side, waist: sweep(corner, { x: 1, y: 0 }, top, squareTo(side)) };
      };
      // The waist is as long along its curve as the formula says.
      const x = solve(waist, waist * 0.8, waist * 1.05, (v) => pathLength(at(v).waist)) ?? waist;
      return { ...at(x), hipPoint, hemPoint: { x: hip + flare, y: L }, down };
    };
    const half = (name: string, hip: number, drawn: Lines, dart: number): Half => {
      s.point(`${name} centre`, { x: 0, y: 0 }, 'on the waist line');
      s.point(`${name} side, waist`, drawn.top, 'as far out as the waist is long, raised', drawn.top.x);
      s.point(`${name} side, hip`, drawn.hipPoint, 'd below the waist', hip);
      s.point(`${name} side, hem`, drawn.hemPoint, 'L below the waist', drawn.hemPoint.x);
      const line = s.line(`${name} waist`, drawn.waist, 'square to centre and side');
      const laid = dartInto(line, pathLength(line) / 2, 20, dart);
      s.line(
        `${name} dart`,
        joined(laid.legs[0], reversedLeg(laid)),
        `2 cm wide, ${dart / 10} cm long, in the middle`
      );
      const side = s.line(
        `${name} side`,
        joined(drawn.side, straight(drawn.hipPoint, drawn.hemPoint)),
        'curved to the hip, then straight'
      );
      return {
        waist: laid,
        side,
        hem: sweepHem({ x: 0, y: L }, drawn.hemPoint, drawn.down),
        centre: straight({ x: 0, y: 0 }, { x: 0, y: L }),
        hip
      };
    };
    const backLines = lines(backHip, backWaist, 10);
    const wanted = pathLength(backLines.side);
    const raise = solve(wanted, 2, 25, (v) => pathLength(lines(frontHip, frontWaist, v).side)) ?? 10;
    s.length('Front, raised at the side', raise, 'so that both sides are as long');
    const back = half('Back', backHip, backLines, 120);
    const front = half('Front', frontHip, lines(frontHip, frontWaist, raise), 100);
    const pieces = new Pieces();
    const hem = chosen.number('hem');
    const slit = chosen.yes('slit');
    const piece = (id: 'front' | 'back', name: string, part: Half, fold: boolean) =>
      pieces.piece({
        id,
        name,
        hand: id === 'front' ? 'left' : 'right',
        ...(fold ? { fold: 'centre' } : { paired: true }),
        grain: [
          { x: part.hip / 2, y: L * 0.4 },
          { x: part.hip / 2, y: L * 0.85 }
        ],
        edges: [
          { id: 'waist-1', path: part.waist.before },
          { id: 'dart', path: part.waist.cap },
          { id: 'waist-2', path: part.waist.after },
          { id: 'side', path: part.side, allowance: INLAY, notches: [depth] },
          { id: 'hem', path: part.hem, backward: true, role: 'hem', allowance: hem },
          {
            id: 'centre',
            path: part.centre,
            backward: true,
            allowance: id === 'back' ? (slit ? 40 : INLAY) : SEAM,
            ...(slit && id === 'back' ? { notches: [L * 0.65] } : {})
          }
        ],
        lines: part.waist.legs.map((path) => ({ path, note: 'Dart' })),
        drills: [{ at: part.waist.drill, note: 'Dart, just short of its point' }],
        note: slit && id === 'back' ? 'The slit runs from the notch of the centre back to the hem.' : ''
      });
    piece('back', 'Back', back, chosen.word('back') === 'fold' && !slit);
    piece('front', 'Front', front, true);
    pieces.seam('Side', ['front', 'side'], ['back', 'side'], { smooth: ['start', 'end'] });
    const finished = (part: Half) => pathLength(part.waist.before) + pathLength(part.waist.after);
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [
        { level: 'waist', body: W, ease: 24, gap: 0, finished: 2 * (finished(back) + finished(front)) },
        { level: 'hip', body: H, ease: chosen.number('ease'), gap: 0, finished: 2 * (backHip + frontHip) }
      ],
      bones: [],
      supplies: [],
      warnings: [],
      cautions: []
    };
  }
};

const reversedLeg = (dart: Dart) => straight(dart.point, dart.after.from);

/** The direction square to the start of a side that runs down. */
function squareTo(side: ReturnType<typeof sweep>): Point {
  const [first] = side.segments;
  const c1 = first!.kind === 'cubic' ? first!.c1 : first!.to;
  return { x: c1.y - side.from.y, y: -(c1.x - side.from.x) };
}

/** The hem from the centre to the side, square to both. */
function sweepHem(centre: Point, side: Point, down: Point) {
  return down.x === 0
    ? straight(centre, side)
    : sweep(centre, { x: 1, y: 0 }, side, { x: down.y, y: -down.x });
}
