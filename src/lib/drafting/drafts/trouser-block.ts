import { endTangents, pathLength, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { length } from '../choices';
import { Construction, joined, straight } from '../construction';
import { minus, solve, sweep } from '../curves';
import { dartInto, type Dart } from '../darts';
import { CannotDraft, type Draft } from '../draft';
import { INLAY, Pieces } from '../pieces';

/*
 * Trouser block: front and back with a dart each. Shares of the hip for fork and widths are usual proportions, from memory; the seat's
 * slant, the drop of the back fork and the raise at the side are found so that inside leg and side seam meet exactly.
 */

interface Half {
  readonly waist: Dart;
  readonly side: Path;
  readonly hem: Path;
  readonly inside: Path;
  /** From the waist down to the fork. */
  readonly crotch: Path;
  readonly crease: number;
}

interface Shape {
  readonly name: 'Front' | 'Back';
  readonly hip: number;
  readonly fork: number;
  readonly waist: number;
  readonly dart: number;
  /** How far in and up the centre starts at the waist. */
  readonly centre: Point;
  /** Widths at knee and hem. */
  readonly knee: number;
  readonly hem: number;
}

interface Levels {
  readonly hip: number;
  readonly crotch: number;
  readonly knee: number;
  readonly hem: number;
}

export const trouserBlock: Draft = {
  id: 'trouser-block',
  version: 1,
  name: 'Trouser block',
  about:
    'Straight trousers with a dart in each quarter. Usual proportions of the hip for fork and widths, from memory; inside leg and side seam are drawn so that they meet.',
  needs: ['waist', 'hip', 'waistToHip', 'crotchDepth', 'insideLeg'],
  mayUse: [],
  choices: [
    length('ease', 'Ease at the hip', 'Added to the whole hip.', { default: 50, min: 20, max: 120 }),
    length('waistEase', 'Ease at the waist', 'Added to the whole waist.', { default: 15, min: 0, max: 50 }),
    length('depthEase', 'Ease of the crotch depth', 'Room to sit.', { default: 10, min: 0, max: 40 }),
    length('hem', 'Hem, all round', 'How wide a leg ends.', { default: 400, min: 260, max: 700 }),
    length('shorter', 'Above the floor', 'How far above the floor the leg ends.', {
      default: 20,
      min: 0,
      max: 500
    }),
    length('turn', 'Hem allowance', 'Turned up at the hem.', { default: 40, min: 10, max: 80 })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const W = s.given('W', 'Waist', body.waist!);
    const H = s.given('H', 'Hip', body.hip!);
    const rise = s.given('r', 'Crotch depth', body.crotchDepth!);
    const leg = s.given('l', 'Inside leg', body.insideLeg!);
    const wide = H / 4 + chosen.number('ease') / 4;
    const width = Math.max(400, H) + 300;
    const at = (name: string, y: number, formula: string) => s.level(name, y, -200, width / 3, formula);
    const hip = at('Hip line', body.waistToHip!, 'waist to hip');
    const crotch = at('Crotch line', rise + chosen.number('depthEase'), 'r + ease');
    const hem = at(
      'Hem line',
      crotch + leg - chosen.number('shorter'),
      'crotch line + l − the distance above the floor'
    );
    const knee = at('Knee line', crotch + leg * 0.45, 'crotch line + 0.45 l');
    if (crotch < hip + 30)
      throw new CannotDraft(
        'crotchDepth',
        null,
        'The crotch lies less than 3 cm below the hip: measure both again.'
      );
    if (hem < crotch + 40) throw new CannotDraft(null, 'shorter', 'The leg would be shorter than 4 cm.');
    const levels: Levels = { hip, crotch, knee: Math.min(knee, hem - 20), hem };
    const fork = s.length('Front fork', H / 16 + 5, 'H ÷ 16 + 0.5 cm');
    const backFork = s.length('Back fork', 1.5 * fork + 5, '1½ of it + 0.5 cm');
    const quarter = (W + chosen.number('waistEase')) / 4;
    const excess = wide - quarter;
    if (excess < -30)
      throw new CannotDraft(
        'waist',
        null,
        'The waist is so much wider than the hip that the side would lean outward.'
      );
    const dart = (share: number, most: number) => Math.max(6, Math.min(most, excess * share));
    const hemWidth = chosen.number('hem') / 2;
    const shape = (name: Shape['name']): Shape => {
      const back = name === 'Back';
      return {
        name,
        hip: wide + (back ? 10 : -10),
        fork: back ? backFork : fork,
        waist: quarter + (back ? 5 : -5),
        dart: back ? dart(0.45, 38) : dart(0.3, 25),
        centre: back
          ? { x: Math.max(5, Math.min(32, excess * 0.35)), y: -18 }
          : { x: Math.max(0, Math.min(12, excess * 0.15)), y: 0 },
        knee: hemWidth + 12 + (back ? 10 : -10),
        hem: hemWidth + (back ? 10 : -10)
      };
    };
    const front = drawHalf(shape('Front'), levels, 0, 8);
    const insideWanted = pathLength(front.inside);
    const sideWanted = pathLength(front.side);
    const drop = solve(insideWanted, -60, 60, (v) =>
      pathLength(drawHalf(shape('Back'), levels, v, 8).inside)
    );
    if (drop === null)
      throw new CannotDraft('hip', null, 'Front and back of the inside leg can’t be brought to one length.');
    const raise = solve(sideWanted, -30, 40, (v) =>
      pathLength(drawHalf(shape('Back'), levels, drop, v).side)
    );
    if (raise === null)
      throw new CannotDraft('waistToHip', null, 'Front and back of the side can’t be brought to one length.');
    s.length('Back fork, dropped', drop, 'so that both inside legs are as long');
    s.length('Back, raised at the side', raise, 'so that both sides are as long');
    const back = drawHalf(shape('Back'), levels, drop, raise);
    const pieces = new Pieces();
    for (const [id, half] of [
      ['front', front],
      ['back', back]
    ] as const) {
      const name = id === 'front' ? 'Front' : 'Back';
      s.line(`${name} crotch`, half.crotch, 'down the centre, round to the fork, square to the inside leg');
      s.line(`${name} inside leg`, half.inside, 'fork to knee to hem');
      s.line(`${name} side`, half.side, 'waist over the hip to knee and hem');
      s.line(
        `${name} waist`,
        joined(half.waist.before, half.waist.cap, half.waist.after),
        'square to centre and side, with its dart'
      );
      s.line(`${name} hem`, half.hem, 'square to side and inside leg');
      pieces.piece({
        id,
        name,
        hand: id === 'front' ? 'left' : 'right',
        paired: true,
        grain: [
          { x: half.crease, y: levels.crotch },
          { x: half.crease, y: levels.hem - 60 }
        ],
        edges: [
          { id: 'waist-1', path: half.waist.before },
          { id: 'dart', path: half.waist.cap },
          { id: 'waist-2', path: half.waist.after },
          { id: 'side', path: half.side, allowance: INLAY },
          { id: 'hem', path: half.hem, backward: true, role: 'hem', allowance: chosen.number('turn') },
          { id: 'inside', path: half.inside, backward: true, allowance: 15 },
          { id: 'crotch', path: half.crotch, backward: true, allowance: id === 'back' ? 20 : 10 }
        ],
        lines: [
          ...half.waist.legs.map((path) => ({ path, note: 'Dart' })),
          {
            path: straight({ x: half.crease, y: levels.hip }, { x: half.crease, y: levels.hem - 5 }),
            note: 'Crease'
          }
        ],
        drills: [{ at: half.waist.drill, note: 'Dart, just short of its point' }]
      });
    }
    pieces.seam('Side', ['front', 'side'], ['back', 'side'], { smooth: ['start', 'end'] });
    pieces.seam('Inside leg', ['front', 'inside'], ['back', 'inside'], { smooth: ['start', 'end'] });
    const finished = (half: Half) => pathLength(half.waist.before) + pathLength(half.waist.after);
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [
        {
          level: 'waist',
          body: W,
          ease: chosen.number('waistEase'),
          gap: 0,
          finished: 2 * (finished(front) + finished(back))
        },
        { level: 'hip', body: H, ease: chosen.number('ease'), gap: 0, finished: 4 * wide }
      ],
      bones: [],
      supplies: [],
      warnings: [],
      cautions: []
    };
  }
};

/** Half a leg; x = 0 is the centre at the hip, the side lies at larger x. */
function drawHalf(shape: Shape, levels: Levels, drop: number, raise: number): Half {
  const { hip, fork, centre } = shape;
  const crease = (hip - fork) / 2;
  const forkPoint = { x: -fork, y: levels.crotch + drop };
  const hipPoint = { x: hip, y: levels.hip };
  const at = (width: number, y: number) => ({
    inner: { x: crease - width / 2, y },
    outer: { x: crease + width / 2, y }
  });
  const knee = at(shape.knee, levels.knee);
  const hem = at(shape.hem, levels.hem);
  const shin = minus(hem.outer, knee.outer);
  const innerShin = minus(hem.inner, knee.inner);
  const inside = joined(
    sweep(
      forkPoint,
      { x: 0.75 * (knee.inner.x - forkPoint.x) + 8, y: knee.inner.y - forkPoint.y },
      knee.inner,
      innerShin,
      [0.3, 0.35]
    ),
    straight(knee.inner, hem.inner)
  );
  const thigh = sweep(hipPoint, { x: -0.02, y: 1 }, knee.outer, shin, [0.33, 0.35]);
  const top = (x: number): Point => ({ x, y: -raise });
  const upper = (x: number) =>
    sweep(top(x), { x: (hip - x) * 1.3, y: levels.hip }, hipPoint, { x: -0.02, y: 1 }, [0.3, 0.35]);
  const into = minus({ x: 0, y: levels.hip }, centre);
  const waistTo = (x: number) => sweep(centre, { x: into.y, y: -into.x }, top(x), squareTo(upper(x)));
  const wanted = shape.waist + shape.dart;
  const x = solve(wanted, 20, hip + 120, (v) => pathLength(waistTo(v)));
  if (x === null)
    throw new CannotDraft('waist', null, 'The waist can’t be drawn on this hip: measure both again.');
  const line = waistTo(x);
  const along = endTangents(inside).start;
  // Down the centre to the hip, then round; it meets the inside leg square, so that front and back run into each other.
  const crotch = joined(
    straight(centre, { x: 0, y: levels.hip }),
    sweep({ x: 0, y: levels.hip }, into, forkPoint, { x: -along.y, y: along.x }, [0.52, 0.5])
  );
  return {
    waist: dartInto(line, pathLength(line) * 0.5, shape.dart, shape.name === 'Back' ? 125 : 95),
    side: joined(upper(x), thigh, straight(knee.outer, hem.outer)),
    hem: sweep(hem.inner, { x: innerShin.y, y: -innerShin.x }, hem.outer, { x: shin.y, y: -shin.x }),
    inside,
    crotch,
    crease
  };
}

/** The direction square to the start of a line that runs down, towards the side. */
function squareTo(path: Path): Point {
  const { start } = endTangents(path);
  return { x: start.y, y: -start.x };
}
