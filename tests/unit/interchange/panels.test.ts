import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { defaultChoices, type ImportChoices } from '$lib/interchange/choices';
import { cornersOf, edgesAt, pointAt } from '$lib/interchange/edges';
import { withoutOutline } from '$lib/interchange/leave-out';
import { panelsFrom } from '$lib/interchange/panels';
import { pathLength, signedArea } from '$lib/interchange/path-measure';
import { readPanelFile } from '$lib/interchange/read-file';
import type { Reading } from '$lib/interchange/reading';
import { readSvg } from '$lib/interchange/svg';
import { readDxf } from '$lib/interchange/dxf';
import { nearestPosition, positionAlong } from '$lib/interchange/walk';
import { panelSchema, type Panel } from '$lib/pattern/panel';
import { dxf, svg } from '../../fixtures/hostile/cases';

const made = (reading: Reading, change: (choices: ImportChoices) => void = () => {}): Panel[] => {
  const choices = defaultChoices(reading);
  for (const panel of choices.panels) panel.drawn = 'sew';
  change(choices);
  const { panels, problems } = panelsFrom(reading, choices);
  expect(problems).toEqual([]);
  return panels;
};
const problemsOf = (reading: Reading, change: (choices: ImportChoices) => void) => {
  const choices = defaultChoices(reading);
  for (const panel of choices.panels) panel.drawn = 'sew';
  change(choices);
  return panelsFrom(reading, choices).problems;
};
const areaOf = (panel: Panel): number =>
  signedArea({ from: panel.edges[0]!.from, segments: panel.edges.flatMap(({ segments }) => segments) });

/**
 * A panel without any symmetry, as seen with the right side of the cloth up: its foot points to the left. The number
 * is positive while the foot points left, when the grain points up.
 */
const leftFoot = [
  [0, 0],
  [60, 0],
  [60, 200],
  [20, 200],
  [20, 30],
  [0, 30]
] as const;

describe('an asymmetric left panel', () => {
  /** Where the foot is beside the straight side, seen along the grain. */
  const footSide = (panel: Panel): 'left' | 'right' => {
    const points = panel.edges.map(({ from }) => from);
    const long = panel.edges
      .map((edge, i) => ({ from: edge.from, to: points[(i + 1) % points.length]! }))
      .sort(
        (a, b) =>
          Math.hypot(b.to.x - b.from.x, b.to.y - b.from.y) - Math.hypot(a.to.x - a.from.x, a.to.y - a.from.y)
      )[0]!;
    const [gx, gy] = [panel.grain.to.x - panel.grain.from.x, panel.grain.to.y - panel.grain.from.y];
    const foot = points.reduce((sum, p) => sum + gx * (p.y - long.from.y) - gy * (p.x - long.from.x), 0);
    return foot > 0 ? 'left' : 'right';
  };

  it('from an SVG is still left', () => {
    const points = leftFoot.map(([x, y]) => `${x},${300 - y}`).join(' ');
    const reading = readSvg(
      svg(`<polygon id="Left_front" points="${points}"/><line id="grain" x1="40" y1="280" x2="40" y2="150"/>`)
    );
    const [panel] = made(reading);
    expect(panel!.hand).toBe('left');
    expect(footSide(panel!)).toBe('left');
  });

  it('from a DXF is still left, also in a block that is turned', () => {
    for (const turn of [0, 90, 200]) {
      const reading = readDxf(
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
          'LEFT FRONT',
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
          ...leftFoot.flatMap(([x, y]) => [0, 'VERTEX', 8, '1', 10, x, 20, y]),
          0,
          'SEQEND',
          0,
          'LINE',
          8,
          '7',
          10,
          40,
          20,
          20,
          11,
          40,
          21,
          150,
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
          '1',
          2,
          'LEFT FRONT',
          10,
          500,
          20,
          70,
          50,
          turn,
          0,
          'ENDSEC',
          0,
          'EOF'
        )
      );
      const [panel] = made(reading);
      expect(panel).toMatchObject({ name: 'LEFT FRONT', hand: 'left' });
      expect(footSide(panel!)).toBe('left');
    }
  });

  it('mirrored by the file on purpose is the other hand', () => {
    const points = leftFoot.map(([x, y]) => `${x},${300 - y}`).join(' ');
    const reading = readSvg(
      svg(
        `<g transform="translate(200 0) scale(-1 1)"><polygon points="${points}"/><line id="grain" x1="40" y1="280" x2="40" y2="150"/></g>`
      )
    );
    expect(footSide(made(reading)[0]!)).toBe('right');
  });
});

describe('panels from the samples', () => {
  it.each(['sample.svg', 'sample.dxf'])('%s: front on the fold, two pairs, a facing', (file) => {
    const reading = readPanelFile(readFileSync(`static/${file}`));
    expect(reading.units.known).toBe(true);
    expect(reading.findings).toEqual([]);
    const panels = made(reading, (choices) => {
      for (const panel of choices.panels) panel.drawn = reading.format === 'dxf' ? 'cut' : 'sew';
    });
    expect(panels.map(({ howMany, paired, fold }) => [howMany, paired, fold !== null])).toEqual([
      [1, false, true],
      [2, true, false],
      [2, true, false],
      [1, false, false]
    ]);
    expect(panels.every(({ grain }) => grain.confirmed)).toBe(true);
    expect(panels.map(({ notches }) => notches.length)).toEqual([1, 1, 1, 0]);
    expect(panels[0]!.edges.find(({ role }) => role === 'fold')!.allowance).toBe(0);
    // In the DXF the sew line inside says how far it runs inside the cut line.
    for (const panel of panels)
      for (const edge of panel.edges) if (edge.role !== 'fold') expect(edge.allowance).toBeCloseTo(10, 1);
  });

  it('seams that are sewn together agree within 1.6 mm (Threads 200, 10 Patternwork Skills: 1/16 in)', () => {
    const panels = made(readPanelFile(readFileSync('static/sample.svg')));
    const length = (name: string, nth: number) => {
      const edge = panels.find((panel) => panel.name === name)!.edges[nth]!;
      return pathLength({ from: edge.from, segments: edge.segments });
    };
    expect(Math.abs(length('Front panel', 2) - length('Side panel', 0))).toBeLessThan(1.6);
    expect(Math.abs(length('Side panel', 2) - length('Back', 2))).toBeLessThan(1.6);
  });
});

describe('what the person says', () => {
  const square = () => readSvg(svg('<rect id="Pocket" x="20" y="20" width="100" height="80"/>'));

  it('must say sew line or cut line', () => {
    expect(problemsOf(square(), ({ panels }) => (panels[0]!.drawn = null))).toMatchObject([
      { field: 'drawn' }
    ]);
  });

  it.each([
    ['howMany', (c: ImportChoices) => Object.assign(c.panels[0]!, { howMany: 3, paired: true })],
    ['name', (c: ImportChoices) => Object.assign(c.panels[0]!, { name: '' })],
    [
      'fold',
      (c: ImportChoices) =>
        Object.assign(c.panels[0]!, {
          fold: 0,
          grain: { from: { x: 0, y: 0 }, to: { x: 50, y: 50 }, confirmed: true }
        })
    ],
    ['fold', (c: ImportChoices) => Object.assign(c.panels[0]!, { fold: 2.5 })],
    ['take', (c: ImportChoices) => Object.assign(c.panels[0]!, { take: false })]
  ] as const)('is refused at %s', (field, change) => {
    expect(problemsOf(square(), change)).toMatchObject([{ field }]);
  });

  it('scales everything by the line that was measured', () => {
    const reading = readSvg(
      svg(
        '<rect width="100" height="80"/><circle cx="50" cy="40" r="10"/><line id="notch" x1="50" y1="0" x2="50" y2="4"/>'
      )
    );
    const [panel] = made(reading, (choices) => (choices.scale = 2.5));
    expect(areaOf(panel!)).toBeCloseTo(100 * 80 * 6.25, 3);
    expect(Math.abs(signedArea(panel!.cutOuts[0]!))).toBeCloseTo(Math.PI * 625, 0);
    expect(panel!.notches[0]!.distance).toBeCloseTo(125, 6);
  });

  it('gives edges their own allowance, role and corner', () => {
    const [panel] = made(square(), ({ panels }) => {
      panels[0]!.exceptions = [
        { at: panels[0]!.corners[1]!, allowance: 30, role: 'hem', treatment: 'mirrored' }
      ];
    });
    expect(panel!.edges.map(({ allowance, role }) => [allowance, role])).toEqual([
      [10, 'seam'],
      [30, 'hem'],
      [10, 'seam'],
      [10, 'seam']
    ]);
    expect(panel!.corners.map(({ treatment }) => treatment)).toEqual([
      'square',
      'mirrored',
      'square',
      'square'
    ]);
  });

  it('keeps a panel whole when its corners are moved into edges', () => {
    const reading = readSvg(svg('<path d="M0 0C40 -50 80 -50 120 0L120 90L0 90Z"/>'));
    const [panel] = made(reading, ({ panels }) => (panels[0]!.corners = [0.3, 1.5, 2.25, 3]));
    expect(panel!.edges).toHaveLength(4);
    expect(panelSchema.safeParse(panel).success).toBe(true);
    expect(areaOf(panel!)).toBeCloseTo(reading.outlines[0]!.area, 3);
  });

  it('takes a sew line inside a cut line as the measure of its allowances', () => {
    const reading = readSvg(
      svg('<rect width="200" height="160"/><rect x="10" y="15" width="180" height="135"/>')
    );
    const [panel] = made(reading, ({ panels }) => (panels[0]!.drawn = 'cut'));
    expect(panel!.edges.map(({ allowance }) => allowance).sort()).toEqual([10, 10, 10, 15]);
    expect(panel!.cutOuts).toEqual([]);
    expect(problemsOf(reading, () => {})).toMatchObject([{ field: 'inner' }]);
  });

  it('frees what stood in a frame that is left out', () => {
    const reading = readSvg(
      svg(
        '<rect width="400" height="400"/><rect x="10" y="10" width="100" height="80"/><rect x="200" y="10" width="100" height="80"/>'
      )
    );
    expect(reading.outlines.filter(({ offered }) => offered).map(({ id }) => id)).toEqual(['o1']);
    expect(
      withoutOutline(reading, 'o1').outlines.map(({ id, inside, offered }) => [id, inside, offered])
    ).toEqual([
      ['o2', null, true],
      ['o3', null, true]
    ]);
  });
});

describe('corners', () => {
  it('are where edges part, and a smooth outline has one', () => {
    const path = (text: string) => readSvg(svg(text)).outlines[0]!.path;
    expect(cornersOf(path('<rect width="9" height="9"/>'))).toEqual([0, 1, 2, 3]);
    expect(cornersOf(path('<circle r="90"/>'))).toEqual([0]);
    expect(cornersOf(path('<rect width="99" height="99" rx="20"/>'))).toEqual([0]);
  });

  it('move along the outline by a distance and back', () => {
    const { path } = readSvg(svg('<path d="M0 0C40 -50 80 -50 120 0L120 90L0 90Z"/>')).outlines[0]!;
    const whole = pathLength(path);
    for (const by of [0, 7.5, 60, 150, whole - 1]) {
      const there = positionAlong(path, 0, by);
      const edges = edgesAt(path, [0, there]);
      if (edges.length > 1)
        expect(pathLength({ from: edges[0]!.from, segments: edges[0]!.segments })).toBeCloseTo(by, 1);
      expect(nearestPosition(path, pointAt(path, there)).distance).toBeLessThan(0.05);
      const back = pointAt(path, positionAlong(path, there, -by));
      expect(Math.hypot(back.x - path.from.x, back.y - path.from.y)).toBeLessThan(0.01);
    }
  });
});
