import { JSDOM } from 'jsdom';
import DxfParser from 'dxf-parser';
import fc from 'fast-check';
import svgpath from 'svgpath';
import { describe, expect, it } from 'vitest';
import { arcCurves, endpointArc } from '$lib/interchange/arcs';
import { bulgeSegments, splineAt, splinePath } from '$lib/interchange/dxf-curves';
import { drawDxf, readDxf } from '$lib/interchange/dxf';
import { flatten, nearestOnPolyline, pointOn, signedArea } from '$lib/interchange/path-measure';
import { parsePathData } from '$lib/interchange/svg-path';
import { readSvg } from '$lib/interchange/svg';
import { readPanelFile } from '$lib/interchange/read-file';
import { readFileSync } from 'node:fs';
import { dxf, svg } from '../fixtures/hostile/cases';
import { runs } from '../runs';

/*
 * Reading of SVG and DXF against published formulas and independent parsers.
 * - SVG 2 (W3C Candidate Recommendation, 2018-10-04), appendix B.2 'Elliptical arc parameter conversion'.
 * - svgpath, dxf-parser and jsdom: libraries of others, read with their own code.
 * - L. Piegl, W. Tiller, The NURBS Book (1997): the Cox–de Boor recursion (2.5), from memory.
 */

const near = (a: { x: number; y: number }, b: { x: number; y: number }, within: number): void =>
  expect(Math.hypot(a.x - b.x, a.y - b.y)).toBeLessThan(within);

describe('SVG path arcs', () => {
  const coordinate = fc.double({ min: -200, max: 200, noNaN: true });
  const arc = fc
    .record({
      x1: coordinate,
      y1: coordinate,
      x2: coordinate,
      y2: coordinate,
      rx: fc.double({ min: 1, max: 150, noNaN: true }),
      ry: fc.double({ min: 1, max: 150, noNaN: true }),
      phi: fc.double({ min: -360, max: 360, noNaN: true }),
      large: fc.boolean(),
      sweep: fc.boolean()
    })
    .filter(({ x1, y1, x2, y2 }) => Math.hypot(x1 - x2, y1 - y2) > 1);

  it('lie on the ellipse of SVG 2, B.2.4 and B.2.5, on the side that the flags say (seed 62)', () => {
    fc.assert(
      fc.property(arc, ({ x1, y1, x2, y2, rx, ry, phi, large, sweep }) => {
        // B.2.4, steps 1 to 3, with B.2.5, written out as published.
        const a = (phi * Math.PI) / 180;
        const xp = Math.cos(a) * ((x1 - x2) / 2) + Math.sin(a) * ((y1 - y2) / 2);
        const yp = -Math.sin(a) * ((x1 - x2) / 2) + Math.cos(a) * ((y1 - y2) / 2);
        const lambda = xp ** 2 / rx ** 2 + yp ** 2 / ry ** 2;
        const [Rx, Ry] = lambda > 1 ? [Math.sqrt(lambda) * rx, Math.sqrt(lambda) * ry] : [rx, ry];
        const radicand = Math.max(
          0,
          (Rx ** 2 * Ry ** 2 - Rx ** 2 * yp ** 2 - Ry ** 2 * xp ** 2) /
            (Rx ** 2 * yp ** 2 + Ry ** 2 * xp ** 2)
        );
        const sign = large !== sweep ? 1 : -1;
        const cxp = sign * Math.sqrt(radicand) * ((Rx * yp) / Ry);
        const cyp = sign * Math.sqrt(radicand) * (-(Ry * xp) / Rx);
        const cx = Math.cos(a) * cxp - Math.sin(a) * cyp + (x1 + x2) / 2;
        const cy = Math.sin(a) * cxp + Math.cos(a) * cyp + (y1 + y2) / 2;
        const theta1 = Math.atan2((yp - cyp) / Ry, (xp - cxp) / Rx);
        let delta = Math.atan2((-yp - cyp) / Ry, (-xp - cxp) / Rx) - theta1;
        if (!sweep && delta > 0) delta -= 2 * Math.PI;
        if (sweep && delta < 0) delta += 2 * Math.PI;

        const from = { x: x1, y: y1 };
        const segments = endpointArc(from, rx, ry, phi, large, sweep, { x: x2, y: y2 });
        near(segments[segments.length - 1]!.to, { x: x2, y: y2 }, 1e-9);
        const line = flatten({ from, segments }, 0.0005);
        for (let i = 0; i <= 16; i += 1) {
          const t = theta1 + (delta * i) / 16;
          const x = Math.cos(a) * Rx * Math.cos(t) - Math.sin(a) * Ry * Math.sin(t) + cx;
          const y = Math.sin(a) * Rx * Math.cos(t) + Math.cos(a) * Ry * Math.sin(t) + cy;
          expect(nearestOnPolyline({ x, y }, line).distance).toBeLessThan(0.002);
        }
      }),
      { seed: 62, numRuns: runs(300) }
    );
  });

  it('of a circle leave it by less than 0.001 mm at a radius of a metre', () => {
    const { from, segments } = arcCurves([1000, 0, 0, 1000, 0, 0], 0, 2 * Math.PI, 1000);
    let last = from;
    for (const segment of segments) {
      for (let i = 0; i <= 20; i += 1) {
        const { x, y } = pointOn(last, segment, i / 20);
        expect(Math.abs(Math.hypot(x, y) - 1000)).toBeLessThan(0.001);
      }
      last = segment.to;
    }
  });
});

describe('SVG path data against svgpath', () => {
  const n = fc.integer({ min: -500, max: 500 }).map((value) => value / 4);
  const pair = fc.tuple(n, n).map((p) => p.join(' '));
  const command = fc.oneof(
    pair.map((p) => `L${p}`),
    pair.map((p) => `l${p}`),
    n.map((v) => `H${v}`),
    n.map((v) => `h${v}`),
    n.map((v) => `V${v}`),
    n.map((v) => `v${v}`),
    fc.tuple(pair, pair, pair).map((p) => `C${p.join(' ')}`),
    fc.tuple(pair, pair, pair).map((p) => `c${p.join(',')}`),
    fc.tuple(pair, pair).map((p) => `S${p.join(' ')}`),
    fc.tuple(pair, pair).map((p) => `s${p.join(' ')}`),
    fc.tuple(pair, pair).map((p) => `Q${p.join(' ')}`),
    fc.tuple(pair, pair).map((p) => `q${p.join(' ')}`),
    pair.map((p) => `T${p}`),
    pair.map((p) => `t${p}`),
    fc.constant('Z'),
    fc.constant('z'),
    pair.map((p) => `M${p}`),
    pair.map((p) => `m${p}`)
  );

  it('every end and control point is where its absolute, unshortened form puts it (seed 63)', () => {
    fc.assert(
      fc.property(fc.array(command, { minLength: 1, maxLength: 30 }), (commands) => {
        const data = `M1 2${commands.join('')}`;
        const { subpaths, error } = parsePathData(data);
        expect(error).toBeNull();
        const theirs: number[][] = [];
        let at = [0, 0];
        let start = [0, 0];
        svgpath(data)
          .abs()
          .unshort()
          .iterate(([kind, ...v]) => {
            const values = v as number[];
            if (kind === 'M') at = start = values;
            else if (kind === 'Z') at = start;
            else {
              if (kind === 'H') at = [values[0]!, at[1]!];
              else if (kind === 'V') at = [at[0]!, values[0]!];
              else at = values.slice(-2);
              theirs.push(at);
            }
          });
        const ours = subpaths.flatMap(({ path }) => path.segments.map(({ to }) => [to.x, to.y]));
        expect(ours.length).toBe(theirs.length);
        ours.forEach((end, i) => end.forEach((value, k) => expect(value).toBeCloseTo(theirs[i]![k]!, 6)));
      }),
      { seed: 63, numRuns: runs(300) }
    );
  });
});

it('SVG elements and names against jsdom’s XML parser', () => {
  const text = readFileSync('static/sample.svg', 'utf8');
  const { document } = new JSDOM(text, { contentType: 'image/svg+xml' }).window;
  const reading = readSvg(text);
  expect(reading.title).toBe(document.querySelector('svg > title')!.textContent);
  expect(reading.outlines).toHaveLength(
    [...document.querySelectorAll('path')].filter((path) => /z\s*$/i.test(path.getAttribute('d')!)).length
  );
  expect(reading.texts.map(({ text: words }) => words)).toEqual(
    [...document.querySelectorAll('text')].map((element) => element.textContent)
  );
  expect(reading.grains).toHaveLength(document.querySelectorAll('line[id^=grain]').length);
});

describe('DXF against dxf-parser', () => {
  it('the sample: blocks, vertices, texts', () => {
    const text = readFileSync('static/sample.dxf', 'latin1');
    const theirs = new DxfParser().parseSync(text)!;
    const reading = readPanelFile(readFileSync('static/sample.dxf'));
    const boundaries = reading.outlines.filter(({ meaning }) => meaning === 'boundary');
    expect(reading.groups.map(({ name }) => name).sort()).toEqual(Object.keys(theirs.blocks).sort());
    for (const outline of boundaries) {
      type Entity = { type: string; layer: string; vertices: { x: number; y: number }[] };
      const block = theirs.blocks[outline.group]!.entities as unknown as Entity[];
      const polyline = block.find(({ type, layer }) => type === 'POLYLINE' && layer === '1')!;
      expect(outline.path.segments).toHaveLength(polyline.vertices.length);
      const area = polyline.vertices.reduce((sum, p, i, all) => {
        const q = all[(i + 1) % all.length]!;
        return sum + (p.x * q.y - q.x * p.y) / 2;
      }, 0);
      expect(outline.area).toBeCloseTo(Math.abs(area), 3);
    }
  });

  it('lines, arcs, circles and bulges: the same numbers (seed 64)', () => {
    const value = fc.integer({ min: -2000, max: 2000 }).map((v) => v / 8);
    const positive = fc.integer({ min: 1, max: 2000 }).map((v) => v / 8);
    fc.assert(
      fc.property(
        fc.array(fc.tuple(value, value, positive, value, value), { minLength: 1, maxLength: 8 }),
        (rows) => {
          const text = dxf(
            0,
            'SECTION',
            2,
            'ENTITIES',
            ...rows.flatMap(([x, y, r, a, b]) => [
              0,
              'LINE',
              8,
              '0',
              10,
              x,
              20,
              y,
              11,
              x + r,
              21,
              b,
              0,
              'ARC',
              8,
              '0',
              10,
              x,
              20,
              y,
              40,
              r,
              50,
              a,
              51,
              a + 90,
              0,
              'CIRCLE',
              8,
              '0',
              10,
              x,
              20,
              y,
              40,
              r
            ]),
            0,
            'ENDSEC',
            0,
            'EOF'
          );
          type Entity = {
            type: string;
            center?: { x: number; y: number };
            radius?: number;
            vertices?: { x: number; y: number }[];
            startAngle?: number;
          };
          const theirs = new DxfParser().parseSync(text)!.entities as unknown as Entity[];
          const ours = drawDxf(text).strokes;
          expect(ours).toHaveLength(theirs.length);
          ours.forEach(({ path }, i) => {
            const entity = theirs[i]!;
            if (entity.type === 'LINE') {
              near(path.from, entity.vertices![0]!, 1e-9);
              near(path.segments[0]!.to, entity.vertices![1]!, 1e-9);
              return;
            }
            const start = entity.type === 'ARC' ? entity.startAngle! : 0;
            near(
              path.from,
              {
                x: entity.center!.x + entity.radius! * Math.cos(start),
                y: entity.center!.y + entity.radius! * Math.sin(start)
              },
              1e-6
            );
            for (const { to } of path.segments)
              expect(Math.hypot(to.x - entity.center!.x, to.y - entity.center!.y)).toBeCloseTo(
                entity.radius!,
                6
              );
          });
        }
      ),
      { seed: 64, numRuns: runs(60) }
    );
  });

  it.each([
    [1, (Math.PI / 2) * 50 ** 2],
    [-1, (-Math.PI / 2) * 50 ** 2],
    [Math.tan(Math.PI / 8), 50 ** 2 * (Math.PI / 2 - 1)]
  ])('a bulge of %f encloses the segment of a circle', (bulge, area) => {
    // The bulge is the tangent of a quarter of the arc's angle; a chord of 100 and an angle of 90° have the radius 70.71.
    const segments = bulgeSegments({ x: 0, y: 0 }, { x: 100, y: 0 }, bulge);
    expect(
      signedArea({ from: { x: 0, y: 0 }, segments: [...segments, { kind: 'line', to: { x: 0, y: 0 } }] })
    ).toBeCloseTo(area, 1);
  });

  it('a block of 100 mm is 100 mm, METRIC and ENGLISH', () => {
    const file = (units: string, side: number) =>
      readDxf(
        dxf(
          0,
          'SECTION',
          2,
          'BLOCKS',
          0,
          'BLOCK',
          8,
          '0',
          2,
          'SQUARE',
          10,
          0,
          20,
          0,
          0,
          'POLYLINE',
          8,
          '1',
          66,
          1,
          70,
          1,
          ...[
            [0, 0],
            [side, 0],
            [side, side],
            [0, side]
          ].flatMap(([x, y]) => [0, 'VERTEX', 8, '1', 10, x!, 20, y!]),
          0,
          'SEQEND',
          0,
          'ENDBLK',
          0,
          'ENDSEC',
          0,
          'SECTION',
          2,
          'ENTITIES',
          0,
          'TEXT',
          8,
          '1',
          10,
          0,
          20,
          0,
          1,
          `UNITS: ${units}`,
          0,
          'INSERT',
          8,
          '1',
          2,
          'SQUARE',
          10,
          0,
          20,
          0,
          0,
          'ENDSEC',
          0,
          'EOF'
        )
      );
    for (const reading of [file('METRIC', 100), file('ENGLISH', 100 / 25.4)]) {
      const { box, area } = reading.outlines[0]!;
      expect(box.maxX - box.minX).toBeCloseTo(100, 6);
      expect(area).toBeCloseTo(10_000, 3);
      expect(reading.units.known).toBe(true);
    }
  });

  it('arrays and mirrored inserts of blocks stand where their transform says', () => {
    const reading = readDxf(
      dxf(
        0,
        'SECTION',
        2,
        'HEADER',
        9,
        '$INSUNITS',
        70,
        5,
        0,
        'ENDSEC',
        0,
        'SECTION',
        2,
        'BLOCKS',
        0,
        'BLOCK',
        8,
        '0',
        2,
        'B',
        10,
        1,
        20,
        1,
        0,
        'LWPOLYLINE',
        8,
        '0',
        90,
        3,
        70,
        1,
        10,
        1,
        20,
        1,
        10,
        5,
        20,
        1,
        10,
        1,
        20,
        4,
        0,
        'ENDBLK',
        0,
        'ENDSEC',
        0,
        'SECTION',
        2,
        'ENTITIES',
        0,
        'INSERT',
        8,
        '0',
        2,
        'B',
        10,
        100,
        20,
        0,
        41,
        -2,
        42,
        2,
        50,
        90,
        70,
        2,
        71,
        1,
        44,
        20,
        0,
        'ENDSEC',
        0,
        'EOF'
      )
    );
    expect(reading.outlines.map(({ area }) => area)).toEqual([2400, 2400]);
    // Mirrored in x by -2, turned by 90°: what ran along +x runs along -y; the second stands 20 cm further along +y.
    expect(reading.outlines[0]!.box).toMatchObject({ minX: 940, maxX: 1000, minY: -80, maxY: 0 });
    expect(reading.outlines[1]!.box).toMatchObject({ minX: 940, maxX: 1000, minY: 120, maxY: 200 });
  });

  it('an extrusion downwards mirrors x, as the arbitrary axis rule of the format says', () => {
    const reading = readDxf(
      dxf(
        0,
        'SECTION',
        2,
        'ENTITIES',
        0,
        'LWPOLYLINE',
        8,
        '0',
        90,
        3,
        70,
        1,
        10,
        10,
        20,
        0,
        10,
        50,
        20,
        0,
        10,
        10,
        20,
        30,
        210,
        0,
        220,
        0,
        230,
        -1,
        0,
        'ENDSEC',
        0,
        'EOF'
      )
    );
    expect(reading.outlines[0]!.box).toMatchObject({ minX: -50, maxX: -10 });
  });
});

describe('B-splines', () => {
  /** The Cox–de Boor recursion, written out. */
  const basis = (i: number, p: number, t: number, u: readonly number[]): number => {
    if (p === 0) return u[i]! <= t && t < u[i + 1]! ? 1 : 0;
    const left = u[i + p]! - u[i]!;
    const right = u[i + p + 1]! - u[i + 1]!;
    return (
      (left === 0 ? 0 : ((t - u[i]!) / left) * basis(i, p - 1, t, u)) +
      (right === 0 ? 0 : ((u[i + p + 1]! - t) / right) * basis(i + 1, p - 1, t, u))
    );
  };

  const spline = fc
    .record({
      degree: fc.integer({ min: 1, max: 5 }),
      extra: fc.integer({ min: 1, max: 6 }),
      clamped: fc.boolean(),
      weighted: fc.boolean()
    })
    .chain(({ degree, extra, clamped, weighted }) => {
      const count = degree + extra;
      return fc.record({
        degree: fc.constant(degree),
        controls: fc.array(
          fc.record({ x: fc.integer({ min: -200, max: 200 }), y: fc.integer({ min: -200, max: 200 }) }),
          { minLength: count, maxLength: count }
        ),
        steps: fc.array(fc.integer({ min: 1, max: 4 }), {
          minLength: count + degree + 1,
          maxLength: count + degree + 1
        }),
        weights: weighted
          ? fc.array(fc.integer({ min: 1, max: 4 }), { minLength: count, maxLength: count })
          : fc.constant([] as number[]),
        clamped: fc.constant(clamped)
      });
    })
    .map(({ steps, clamped, ...rest }) => {
      let sum = 0;
      const knots = steps.map((step) => (sum += step));
      if (clamped)
        for (let i = 0; i < rest.degree; i += 1) {
          knots[i] = knots[rest.degree]!;
          knots[knots.length - 1 - i] = knots[knots.length - 1 - rest.degree]!;
        }
      return { ...rest, knots };
    });

  it('follow the sum of their basis functions, clamped or not, weighted or not (seed 65)', () => {
    fc.assert(
      fc.property(spline, (given) => {
        const { degree, knots, controls, weights } = given;
        const found = splinePath(given)!;
        expect(found).not.toBeNull();
        const [start, end] = [knots[degree]!, knots[controls.length]!];
        const line = flatten(found.path, 0.001);
        for (let i = 0; i < 20; i += 1) {
          const t = start + ((end - start) * i) / 20;
          let [x, y, w] = [0, 0, 0];
          controls.forEach((control, k) => {
            const share = basis(k, degree, t, knots) * (weights[k] ?? 1);
            x += share * control.x;
            y += share * control.y;
            w += share;
          });
          near(splineAt(given, t).at, { x: x / w, y: y / w }, 1e-6);
          expect(nearestOnPolyline({ x: x / w, y: y / w }, line).distance).toBeLessThan(
            found.exact ? 0.005 : 0.02
          );
        }
      }),
      { seed: 65, numRuns: runs(150) }
    );
  });
});

it('CSS units: 96 px are one inch, 2.54 cm are one inch (CSS Values and Units 3, 6.2)', () => {
  const width = (unit: string, size: number): number => {
    const { box } = readSvg(
      svg(
        '<rect width="10" height="10"/>',
        `width="${size}${unit}" height="${size}${unit}" viewBox="0 0 10 10"`
      )
    ).outlines[0]!;
    return box.maxX - box.minX;
  };
  for (const [unit, size] of [
    ['in', 1],
    ['cm', 2.54],
    ['mm', 25.4],
    ['pt', 72],
    ['pc', 6],
    ['px', 96],
    ['Q', 101.6]
  ] as const)
    expect(width(unit, size)).toBeCloseTo(25.4, 9 - 4);
});
