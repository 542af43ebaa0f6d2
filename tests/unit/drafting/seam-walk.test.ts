import { describe, expect, it } from 'vitest';
import { straight } from '$lib/drafting/construction';
import { sweep } from '$lib/drafting/curves';
import { Pieces } from '$lib/drafting/pieces';
import { SEAM_FAULT, SEAM_TOLERANCE, sideLength, walkSeam, type Seam } from '$lib/drafting/seam-walk';

/*
 * Two panels of 200 × 100 sewn at their long sides; then one thing at a time goes wrong.
 */

interface Plan {
  /** How long the second panel's side is. */
  readonly long?: number;
  readonly notchesA?: readonly number[];
  readonly notchesB?: readonly number[];
  /** How far its lower corner stands off square, millimetres over 100. */
  readonly slant?: number;
}

function sewn(plan: Plan, seam: Partial<Pick<Seam, 'ease' | 'smooth' | 'gathered'>> = {}) {
  const { long = 200, notchesA = [80], notchesB = [80], slant = 0 } = plan;
  const pieces = new Pieces();
  const panel = (id: string, length: number, notches: readonly number[], low: number) => {
    const [a, b, c, d] = [
      { x: 0, y: 0 },
      { x: 100, y: 0 },
      { x: 100, y: length },
      { x: 0, y: length + low }
    ] as const;
    pieces.piece({
      id,
      name: id,
      paired: true,
      grain: [
        { x: 50, y: 150 },
        { x: 50, y: 50 }
      ],
      edges: [
        { id: 'top', path: straight(a, b) },
        { id: 'side', path: straight(b, c), notches },
        { id: 'hem', path: straight(c, d) },
        { id: 'centre', path: straight(d, a) }
      ]
    });
  };
  panel('front', 200, notchesA, 0);
  panel('back', long, notchesB, slant);
  pieces.seam('Side', ['front', 'side'], ['back', 'side'], seam);
  return walkSeam(pieces.panels, pieces.seams[0]!);
}

describe('walking a seam', () => {
  it('finds nothing where everything meets', () => {
    const walk = sewn({}, { smooth: ['start', 'end'] });
    expect(walk.lengthA).toBeCloseTo(200, 6);
    expect(walk.difference).toBeCloseTo(0, 6);
    expect(walk.notches).toEqual([{ a: expect.closeTo(80, 6), b: expect.closeTo(80, 6), off: 0 }]);
    expect(walk.angles.start).toBeCloseTo(180, 6);
    expect(walk.findings).toEqual([]);
  });

  it('names a difference in mm and inch, from 1.6 mm to look at, from 6 mm as a fault', () => {
    const findings = (long: number) => sewn({ long }).findings.map(({ kind, weight }) => [kind, weight]);
    expect(findings(200 + SEAM_TOLERANCE - 0.01)).toEqual([]);
    expect(findings(200 + SEAM_TOLERANCE + 0.01)).toEqual([['length', 'look']]);
    expect(findings(200 - SEAM_FAULT - 0.01)).toEqual([['length', 'fault']]);
    const [finding] = sewn({ long: 203.2 }).findings;
    expect(finding!.message).toContain('back is 3.2 mm (1/8 in) longer than front');
    expect(finding!.measure).toBeCloseTo(3.2, 6);
  });

  it('takes the intended ease off', () => {
    expect(sewn({ long: 208, notchesB: [80] }, { ease: 8 }).findings).toEqual([]);
    const [finding] = sewn({ long: 200 }, { ease: 8 }).findings;
    expect(finding!.message).toContain('back is 8.0 mm');
    expect(finding!.message).toContain('shorter');
  });

  it('lets an eased notch lie anywhere within the ease, and a gathered one only in proportion', () => {
    expect(sewn({ long: 208, notchesB: [86] }, { ease: 8 }).findings).toEqual([]);
    expect(sewn({ long: 208, notchesB: [95] }, { ease: 8 }).findings.map(({ kind }) => kind)).toEqual([
      'notch'
    ]);
    const gathered = (at: number) =>
      sewn({ long: 400, notchesB: [at] }, { ease: 200, gathered: true }).findings;
    expect(gathered(160)).toEqual([]);
    expect(gathered(150).map(({ kind }) => kind)).toEqual(['notch']);
  });

  it('says how far a notch misses the other one, and counts them', () => {
    const off = sewn({ notchesB: [84] }).findings;
    expect(off.map(({ kind, weight }) => [kind, weight])).toEqual([['notch', 'look']]);
    expect(off[0]!.measure).toBeCloseTo(4, 6);
    expect(sewn({ notchesA: [80, 120], notchesB: [80] }).findings.map(({ kind }) => kind)).toEqual([
      'notch-count'
    ]);
  });

  it('adds up the corners where the edge shall run on, and only there', () => {
    const bent = sewn({ slant: 20 }, { smooth: ['end'] });
    // The hem drops 20 over 100 beyond the seam.
    expect(Math.abs(bent.angles.end! - 180)).toBeCloseTo((Math.atan2(20, 100) * 180) / Math.PI, 6);
    expect(bent.findings.map(({ kind }) => kind)).toEqual(['corner']);
    expect(sewn({ slant: 20 }).findings).toEqual([]);
  });

  it('measures along curves, not across them', () => {
    const pieces = new Pieces();
    const [a, b] = [
      { x: 0, y: 0 },
      { x: 0, y: 100 }
    ];
    // A quarter circle's handles twice over: a half circle of radius 50 within a hair.
    const half = sweep(a, { x: 1, y: 0 }, { x: 50, y: 50 }, { x: 0, y: 1 }, 0.5522847498 / Math.SQRT2);
    const rest = sweep({ x: 50, y: 50 }, { x: 0, y: 1 }, b, { x: -1, y: 0 }, 0.5522847498 / Math.SQRT2);
    pieces.piece({
      id: 'round',
      name: 'Round',
      grain: [
        { x: 10, y: 80 },
        { x: 10, y: 20 }
      ],
      edges: [
        { id: 'upper', path: half },
        { id: 'lower', path: rest },
        { id: 'back', path: straight(b, a) }
      ]
    });
    pieces.seam('Round', ['round', 'upper', 'lower'], ['round', 'lower', 'upper']);
    expect(sideLength(pieces.panels, pieces.seams[0]!.a)).toBeCloseTo(Math.PI * 50, 1);
    expect(() => pieces.seam('None', ['round', 'nowhere'], ['round', 'upper'])).toThrow(/nowhere/);
  });
});
