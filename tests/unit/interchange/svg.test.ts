import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readSvg } from '$lib/interchange/svg';
import { svg } from '../../fixtures/hostile/cases';

const only = (text: string) => {
  const { outlines } = readSvg(text);
  expect(outlines).toHaveLength(1);
  return outlines[0]!;
};

describe('shapes of an SVG', () => {
  it('come in millimetres, y turned up, counter-clockwise', () => {
    const outline = only(svg('<polygon id="Yoke" points="10,10 110,10 110,60 10,90"/>'));
    expect(outline).toMatchObject({
      name: 'Yoke',
      box: { minX: 10, minY: -90, maxX: 110, maxY: -10 },
      inside: null
    });
    expect(outline.area).toBeCloseTo(((50 + 80) / 2) * 100, 6);
  });

  it.each([
    ['rect', '<rect x="5" y="5" width="40" height="30"/>', 1200],
    ['rounded rect', '<rect width="40" height="30" rx="10" ry="5"/>', 1200 - (4 - Math.PI) * 50],
    ['rect rounded beyond its half', '<rect width="40" height="30" rx="90"/>', Math.PI * 20 * 15],
    ['circle', '<circle cx="50" cy="50" r="40"/>', Math.PI * 1600],
    ['ellipse', '<ellipse cx="50" cy="50" rx="40" ry="20"/>', Math.PI * 800],
    ['arcs', '<path d="M0 50A50 50 0 0 1 100 50A50 50 0 0 1 0 50"/>', Math.PI * 2500],
    ['relative commands', '<path d="m10 10 h40 v30 h-40 z"/>', 1200],
    ['flags written together', '<path d="M0 50a50 50 0 01100 0a50 50 0 01-100 0z"/>', Math.PI * 2500],
    ['quadratic', '<path d="M0 0Q50 100 100 0Z"/>', (2 / 3) * 100 * 50],
    ['smooth curves', '<path d="M0 0C0 40 50 40 50 0S100 -40 100 0V90H0Z"/>', 9000],
    ['smooth quadratics', '<path d="M0 0Q25 50 50 0T100 0V90H0Z"/>', 9000],
    ['lines end to end', '<path d="M0 0H30V40"/><line x1="0" y1="0" x2="30" y2="40"/>', 600]
  ])('%s', (_, shape, area) => {
    expect(only(svg(shape)).area).toBeCloseTo(area, 1);
  });

  it.each([
    ['mm', 1],
    ['cm', 10],
    ['in', 25.4],
    ['pt', 25.4 / 72],
    ['pc', 25.4 / 6],
    ['px', 25.4 / 96],
    ['', 25.4 / 96]
  ])('100 %s are as long as they should be', (unit, factor) => {
    const { box } = only(
      svg(`<rect width="100" height="100"/>`, `width="200${unit}" height="200${unit}" viewBox="0 0 200 200"`)
    );
    expect(box.maxX - box.minX).toBeCloseTo(100 * factor, 5);
  });

  it('keep their shape under viewBox and preserveAspectRatio', () => {
    const at = (preserve: string) =>
      only(
        svg(
          '<rect width="10" height="10"/>',
          `width="200mm" height="100mm" viewBox="0 0 10 10" preserveAspectRatio="${preserve}"`
        )
      ).box;
    expect(at('xMidYMid meet')).toMatchObject({ minX: 50, maxX: 150, minY: -100, maxY: 0 });
    expect(at('xMinYMin meet')).toMatchObject({ minX: 0, maxX: 100 });
    expect(at('xMaxYMid slice')).toMatchObject({ minX: 0, maxX: 200, minY: -150, maxY: 50 });
    expect(at('none')).toMatchObject({ minX: 0, maxX: 200, minY: -100, maxY: 0 });
  });

  it('come once for every use, also of symbols, where they are used', () => {
    const { outlines } = readSvg(
      svg(
        '<defs><path id="half" d="M0 0H40V30Z"/><symbol id="s" viewBox="0 0 10 10"><rect width="10" height="5"/></symbol></defs>' +
          '<use href="#half" x="10" y="5"/><use xlink:href="#half" transform="translate(100 0) scale(-1 1)"/><use href="#s" x="200" width="50" height="50"/>'
      )
    );
    expect(outlines.map(({ area }) => Math.round(area))).toEqual([600, 600, 50 * 25]);
    expect(outlines[0]!.box).toMatchObject({ minX: 10, maxX: 50, minY: -35, maxY: -5 });
    expect(outlines[1]!.box).toMatchObject({ minX: 60, maxX: 100 });
  });

  it('stand in each other', () => {
    const { outlines } = readSvg(
      svg(
        '<rect width="200" height="200"/><rect x="10" y="10" width="180" height="180"/><circle cx="100" cy="100" r="20"/><rect x="300" width="50" height="50"/>'
      )
    );
    expect(outlines.map(({ inside }) => inside)).toEqual([null, 'o1', 'o2', null]);
    expect(outlines.map(({ offered }) => offered)).toEqual([true, false, false, true]);
  });

  it('have grain lines by name, by marker and by arrow head; the rest are lines inside', () => {
    const reading = readSvg(
      svg(
        '<rect width="100" height="100"/><g id="Grain"><line x1="50" y1="10" x2="50" y2="90"/></g>' +
          '<rect x="150" width="100" height="100"/><line x1="200" y1="90" x2="200" y2="10" marker-end="url(#tip)"/>' +
          '<rect x="300" width="100" height="100"/><path d="M350 10V90M345 18L350 10L355 18M345 82L350 90L355 82"/>' +
          '<polyline points="320,100 330,40 340,100"/>'
      )
    );
    expect(reading.grains.map(({ outline, source }) => [outline, source])).toEqual([
      ['o1', 'name'],
      ['o2', 'arrow'],
      ['o3', 'arrow']
    ]);
    expect(reading.openLines.map(({ outline }) => outline)).toEqual(['o3']);
  });

  it('never carry markup along: names and texts are plain words', () => {
    const { outlines } = readSvg(
      svg('<g><title>Sleeve &lt;img src=x&gt;</title><rect width="50" height="90"/></g>')
    );
    expect(outlines[0]!.name).toBe('Sleeve <img src=x>');
  });
});

const number = fc.double({ min: -3, max: 3, noNaN: true });
const transform = fc.oneof(
  fc.tuple(number, number).map(([x, y]) => ({ text: `translate(${x} ${y})`, scale: 1 })),
  fc.double({ min: 0.3, max: 3, noNaN: true }).map((s) => ({ text: `scale(${s})`, scale: s * s })),
  fc.double({ min: 0.3, max: 3, noNaN: true }).map((s) => ({ text: `scale(${-s}, ${1 / s})`, scale: 1 })),
  fc.integer({ min: -720, max: 720 }).map((a) => ({ text: `rotate(${a}, 3, 4)`, scale: 1 })),
  fc.integer({ min: -60, max: 60 }).map((a) => ({ text: `skewX(${a})`, scale: 1 })),
  fc.integer({ min: -60, max: 60 }).map((a) => ({ text: `skewY(${a})`, scale: 1 })),
  fc.tuple(number, number).map(([b, c]) => ({ text: `matrix(1 ${b} ${c} ${1 + b * c} 0 0)`, scale: 1 }))
);

it('areas change as the determinant of the transforms says (seed 61)', () => {
  fc.assert(
    fc.property(fc.array(transform, { minLength: 1, maxLength: 6 }), fc.boolean(), (steps, nested) => {
      const shape = '<path d="M0 0C10 -20 30 -20 40 0A20 20 0 0 1 40 40L0 30Z"/>';
      const plain = only(svg(shape)).area;
      const texts = steps.map(({ text }) => text);
      const moved = nested
        ? texts.reduceRight((inside, text) => `<g transform="${text}">${inside}</g>`, shape)
        : `<g transform="${texts.join(' ')}">${shape}</g>`;
      const scale = steps.reduce((product, step) => product * step.scale, 1);
      const { area } = only(svg(moved));
      expect(Math.abs(area / (plain * scale) - 1)).toBeLessThan(1e-4);
    }),
    { seed: 61, numRuns: 200 }
  );
});
