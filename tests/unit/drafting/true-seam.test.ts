import fc from 'fast-check';
import { expect, it } from 'vitest';
import { walkSeam } from '$lib/drafting/seam-walk';
import { pickedSeam, trueSeam } from '$lib/drafting/true-seam';
import { panelFindings } from '$lib/pattern/panel-check';
import { waistcoat } from '$lib/server/demo/waistcoat';
import { runs } from '../../runs';

const panels = waistcoat.filter(({ id }) => id === 'front' || id === 'back');
const sides = (ease: number) =>
  pickedSeam({ panel: 'front', edge: 'side' }, { panel: 'back', edge: 'side', sameWay: true }, ease);

it('trues a picked seam by letting it run on, lengthening here, shortening there or sharing, for any ease', () => {
  fc.assert(
    fc.property(
      fc.constantFrom('a' as const, 'b' as const, 'share' as const),
      fc.constantFrom('start' as const, 'end' as const),
      fc.double({ min: -15, max: 15, noNaN: true }),
      (change, end, ease) => {
        const seam = sides(ease);
        const trued = trueSeam(panels, seam, { change, how: 'run on', end });
        expect(trued.refused).toBeUndefined();
        const { before, after, panels: now } = trued.made!;
        expect(Math.abs(after.difference)).toBeLessThan(0.005);
        if (change === 'a') expect(after.lengthB).toBe(before.lengthB);
        if (change === 'b') expect(after.lengthA).toBe(before.lengthA);
        if (change === 'share')
          expect(Math.abs(after.lengthA - before.lengthA)).toBeCloseTo(Math.abs(before.difference) / 2, 2);
        for (const panel of now)
          expect(panelFindings(panel).filter(({ severity }) => severity === 'stops')).toEqual([]);
      }
    ),
    { numRuns: runs(25), seed: 21 }
  );
});

it('trues by the curve alone, the ends where they are, and says when a straight edge can not', () => {
  const armholes = (ease: number) =>
    pickedSeam({ panel: 'front', edge: 'armhole' }, { panel: 'back', edge: 'armhole', sameWay: true }, ease);
  const seam = armholes(walkSeam(panels, armholes(0)).difference - 2);
  const trued = trueSeam(panels, seam, { change: 'b', how: 'bow', end: 'end' });
  expect(Math.abs(trued.made!.after.difference)).toBeLessThan(0.005);
  const was = panels[1]!.edges;
  expect(trued.made!.panels[1]!.edges.map(({ from }) => from)).toEqual(was.map(({ from }) => from));
  const shoulders = (ease: number) =>
    pickedSeam(
      { panel: 'front', edge: 'shoulder' },
      { panel: 'back', edge: 'shoulder', sameWay: false },
      ease
    );
  const shoulder = shoulders(walkSeam(panels, shoulders(0)).difference - 1);
  expect(trueSeam(panels, shoulder, { change: 'a', how: 'bow', end: 'end' }).refused).toMatch(/straight/);
  const slid = trueSeam(panels, shoulder, { change: 'a', how: 'along beside', end: 'end' });
  expect(Math.abs(slid.made!.after.difference)).toBeLessThan(0.005);
});
