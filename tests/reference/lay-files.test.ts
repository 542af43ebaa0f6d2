import DxfParser from 'dxf-parser';
import { JSDOM } from 'jsdom';
import Papa from 'papaparse';
import SvgPath from 'svgpath';
import { describe, expect, it } from 'vitest';
import { area } from '$lib/geometry/polygon';
import { layDxf, laySvg, panelsDxf, placementRows } from '$lib/guide/lay-files';
import { layPieces } from '$lib/guide/laid-piece';
import type { LayDocument } from '$lib/lay/document';
import * as workroom from '../unit/lay/workroom';

/*
 * Files of a kept lay, read back by parsers that are not ours (jsdom, svgpath, dxf-parser, papaparse).
 */

const book = workroom.bookOf(
  workroom.panel('ell', workroom.ell, { howMany: 2, paired: true }),
  workroom.panel('=cmd', workroom.rectangle(240, 90), { symmetric: true })
);
const empty = workroom.lay(book, [], workroom.strip(), [workroom.garment('ada')]);
const at = (id: string, panel: string, x: number, y: number, turn: number, flip: boolean) => ({
  id,
  panel,
  garment: 'ada',
  x,
  y,
  turn,
  flip,
  locked: false
});
const document: LayDocument = {
  ...empty,
  placements: [
    at('a', 'ell', 10, 20.5, 0, false),
    at('b', 'ell', 700, 700, 180, true),
    at('c', '=cmd', 20, 400, 0, false)
  ]
};
const pieces = layPieces(document, book);
const key = (points: readonly { x: number; y: number }[]) =>
  [...points.map(({ x, y }) => `${x.toFixed(3)} ${y.toFixed(3)}`)].sort().join(' ');

describe('a lay as SVG', () => {
  const svg = laySvg(document, book, 'Order <7> & "more"');
  const page = new JSDOM(svg, { contentType: 'image/svg+xml' }).window.document;

  it('is as large as the cloth, in millimetres, and shows every cut line where it lies', () => {
    const root = page.documentElement;
    expect(root.getAttribute('height')).toBe('1000mm');
    const [, , wide, high] = root.getAttribute('viewBox')!.split(' ').map(Number);
    expect([wide, high]).toEqual([Math.max(...pieces.map(({ box }) => box.maxX)), 1000]);
    const drawn = [...page.querySelectorAll('path.cut')].map((path) => {
      const points: { x: number; y: number }[] = [];
      new SvgPath(path.getAttribute('d')!).abs().iterate((segment) => {
        const [command, x, y] = segment as unknown as [string, number, number];
        if (command !== 'Z') points.push({ x, y: 1000 - y });
      });
      return key(points);
    });
    expect(drawn).toEqual(pieces.map(({ cut }) => key(cut)));
  });

  it('holds names as text only', () => {
    expect(page.querySelector('parsererror')).toBeNull();
    expect(page.querySelector('title')!.textContent).toBe('Order <7> & "more"');
    expect(page.querySelectorAll('script')).toHaveLength(0);
  });
});

type Entity = {
  type: string;
  layer: string;
  vertices?: { x: number; y: number }[];
  position?: { x: number; y: number };
};

it('a lay as DXF: every cut line on its layer, same area, same place', () => {
  const dxf = new DxfParser().parseSync(layDxf(document, book))!;
  const cut = (dxf.entities as unknown as Entity[]).filter(({ layer }) => layer === 'CUT');
  expect(cut.map(({ vertices }) => key(vertices!))).toEqual(pieces.map(({ cut: outline }) => key(outline)));
  cut.forEach(({ vertices }, i) =>
    expect(Math.abs(area(vertices!))).toBeCloseTo(Math.abs(area(pieces[i]!.cut)), 3)
  );
});

it('panels as DXF: one block each, boundary on 1, grain on 7, words on 15, all 7-bit', () => {
  const text = panelsDxf(document, book, 'Höhle & Söhne');
  expect([...text].every((c) => c <= '~')).toBe(true);
  const dxf = new DxfParser().parseSync(text)!;
  const blocks = Object.values(dxf.blocks) as unknown as { entities: Entity[] }[];
  // The pair is drawn as left and as right.
  expect(blocks).toHaveLength(3);
  for (const { entities } of blocks) {
    const layers = entities.map(({ layer }) => layer);
    expect(layers.filter((layer) => layer === '1')).toHaveLength(1);
    expect(layers).toContain('7');
    expect(layers.filter((layer) => layer === '15')).toHaveLength(2);
  }
  const size = (points: readonly { x: number; y: number }[]) => Math.round(Math.abs(area(points)));
  const areas = blocks.map(({ entities }) => size(entities.find(({ layer }) => layer === '1')!.vertices!));
  expect(areas.sort()).toEqual(pieces.map(({ cut }) => size(cut)).sort());
});

it('placements as CSV: a row each, and nothing that a spreadsheet would run', () => {
  const text = Papa.unparse(placementRows(document, book), { escapeFormulae: true });
  const { data, errors } = Papa.parse<string[]>(text);
  expect(errors).toEqual([]);
  expect(data).toHaveLength(4);
  const [head, ...rows] = data;
  const column = (name: string) => rows.map((row) => row[head!.indexOf(name)]!);
  expect(
    column('x mm')
      .map(Number)
      .sort((a, b) => a - b)
  ).toEqual([10, 20, 700]);
  expect(column('panel').some((cell) => cell.startsWith('='))).toBe(false);
});
