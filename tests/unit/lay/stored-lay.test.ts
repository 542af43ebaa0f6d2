import { describe, expect, it } from 'vitest';
import { openKeptLay, shortName } from '$lib/lay/kept-lay';
import { newLay, openLayDocument, UnreadableDocument, upgraded, type Upgrade } from '$lib/lay/stored-lay';
import { bookOf, ell, garment, lay, panel, placement, strip } from './workroom';

const book = bookOf(panel('ell', ell, { paired: true, howMany: 2 }));
const document = lay(book, [placement('a', 'ell')]);
const json = (changes: object = {}): unknown => JSON.parse(JSON.stringify({ ...document, ...changes }));

describe('the door of lay documents', () => {
  it('lets a stored lay in as it was', () => {
    expect(openLayDocument(json())).toEqual(document);
  });

  it('puts every number on its grid', () => {
    const off = { ...placement('a', 'ell'), x: 1.00049, y: -0.0001, turn: -90.00004 };
    expect(openLayDocument(json({ placements: [off] })).placements[0]).toMatchObject({
      x: 1,
      y: 0,
      turn: 270
    });
  });

  it.each([
    ['no object', 7, /Expected a lay document, got number/],
    ['a list', [], /got a list/],
    ['null', null, /got null/],
    ['no schema', json({ schema: undefined }), /Expected a schema number of 1 to 3, got undefined/],
    ['a newer schema', json({ schema: 4 }), /Expected schema 3 or older, got 4/],
    ['a schema that is no number', json({ schema: '1' }), /got "1"/],
    ['too many placements', json({ placements: Array(5001).fill(1) }), /at most 5000 placements, got 5001/],
    ['a placement that does not fit', json({ placements: [{ id: 'a' }] }), /placements\[0\]/],
    ['no number', json({ placements: [{ ...placement('a', 'ell'), x: null }] }), /expected number/],
    [
      'an id twice',
      json({ placements: [placement('a', 'ell'), placement('a', 'ell')] }),
      /every placement once, got a twice/
    ],
    [
      'a spread that leaves cloth uncovered',
      json({ strip: { ...strip(), usableWidth: 900 } }),
      /spread to end at 900 mm on a usable width of 900 mm, got 1000 mm/
    ],
    [
      'a usable width beyond the full one',
      json({ strip: { ...strip(), fullWidth: 900 } }),
      /at most the full width of 900 mm, got 1000 mm/
    ]
  ])('refuses %s with what it got and expected', (_, bad, message) => {
    expect(() => openLayDocument(bad)).toThrow(UnreadableDocument);
    expect(() => openLayDocument(bad)).toThrow(message);
  });

  it('brings older schemas up step by step', () => {
    const steps = new Map<number, Upgrade>([
      [1, (old) => ({ ...old, pins: [] })],
      [2, ({ pins, ...old }) => ({ ...old, weights: pins })]
    ]);
    expect(upgraded({ schema: 1, name: 'x' }, 3, steps)).toEqual({ schema: 3, name: 'x', weights: [] });
    expect(upgraded({ schema: 2, pins: [1] }, 3, steps)).toEqual({ schema: 3, weights: [1] });
    expect(() => upgraded({ schema: 1 }, 3, new Map())).toThrow('Schema 1 can no longer be read.');
  });
});

describe('a new lay', () => {
  it('has everything on the Rail', () => {
    const fresh = newLay({ strip: strip(), garments: [garment()], book });
    expect(fresh).toEqual(lay(book, []));
    expect(openLayDocument(JSON.parse(JSON.stringify(fresh)))).toEqual(fresh);
  });
});

describe('a kept lay', () => {
  const kept = {
    schema: 1 as const,
    document,
    panels: book,
    labels: {
      studio: 'Linden Row',
      lay: 'Lay 1',
      order: { number: 4, shortName: 'Ada L.' },
      cloth: { name: 'Crêpe', fibre: 'wool', colour: '#FFFDF8' }
    },
    keptAt: 1
  };

  it('comes back from its bytes as it was', () => {
    expect(openKeptLay(JSON.parse(JSON.stringify(kept)))).toEqual(kept);
  });

  it('is refused without its labels', () => {
    expect(() => openKeptLay({ ...kept, labels: {} })).toThrow(UnreadableDocument);
  });

  it('names the client shortly', () => {
    expect(shortName('Ada  Maria Lund ')).toBe('Ada L.');
    expect(shortName('Øyvind Åsen')).toBe('Øyvind Å.');
    expect(shortName('Cher')).toBe('Cher');
  });
});
