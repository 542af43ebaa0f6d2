import { create } from 'qrcode';
import { describe, expect, it } from 'vitest';
import { GuideRefusal, makeGuide } from '$lib/guide/guide';
import { guideChoiceSchema, type GuideChoice } from '$lib/guide/guide-choice';
import type { GuideInput } from '$lib/guide/guide-input';
import { readGuide, type ReadPage } from '../../reference/read-guide';
import { guideFonts, sampleBook, sampleDocument, sampleInput } from './sample-lay';

const fonts = guideFonts();
const choice = (given: object): GuideChoice => guideChoiceSchema.parse(given);
const sheets = choice({ kind: 'sheets', paper: 'A2' });
const unreleased = { ...sampleInput().revision, released: null };

async function pagesOf(input: GuideInput, chosen = sheets) {
  const guide = await makeGuide(input, chosen, fonts);
  const pages = await readGuide(guide.bytes);
  return { ...guide, pages, sheetPages: pages.slice(-guide.sheets) };
}

const textOf = (page: ReadPage) => page.texts.map(({ text }) => text).join(' ');

describe('the ticket', () => {
  it('says studio, order, short name, garment, cloth, spread, length, efficiency, pieces and revision', async () => {
    const { pages } = await pagesOf(sampleInput());
    const text = textOf(pages[0]!);
    for (const wanted of [
      'Needle & Thimble',
      'Order 27',
      'Ada L.',
      'Ada dress 38 · 1',
      'Wool crêpe, deep green',
      '150 cm, usable 148 cm',
      'RIGHT SIDE UP',
      'Open, single ply',
      '167.5 cm',
      'Bodice front, left hand',
      'Bodice front, right hand',
      '3 · after the toile',
      '1a2b 3c4d 5e6f',
      'Scale 100 %',
      'never pierced'
    ])
      expect(text).toContain(wanted);
    expect(text).toMatch(/Efficiency \d\d\.\d %/);
  });

  it('says so while pieces are loose', async () => {
    const { readings } = sampleInput();
    const loose = { ...readings, pieces: { needed: 11, placed: 9, loose: 2 } };
    const { pages } = await pagesOf(sampleInput(sampleDocument(), { readings: loose }));
    expect(textOf(pages[0]!)).toContain('so far');
    expect(textOf(pages[0]!)).toContain('2 not on the cloth yet');
  });

  it('goes on to further pages, with no piece lost, when the list is long', async () => {
    const many = sampleDocument(12);
    const { pages } = await pagesOf(sampleInput(many), choice({ kind: 'whole' }));
    const list = pages
      .filter((page) => /Order 27/.test(textOf(page)))
      .map(textOf)
      .join(' ');
    for (let i = 1; i <= 12; i++) expect(list).toContain(`Ada dress 38 · ${i}`);
    expect(textOf(pages[1]!)).toContain('Pieces, continued');
  });

  it('carries the code of the scan address as black squares and both check squares', async () => {
    const { pages } = await pagesOf(sampleInput());
    const filled = pages[0]!.paths.filter(({ painted }) => painted === 'filled').map(({ points }) => points);
    const xs = filled.flat().map(({ x }) => x);
    const ys = filled.flat().map(({ y }) => y);
    const [left, right, top] = [Math.min(...xs), Math.max(...xs), Math.max(...ys)];
    // The code as the library gives it, module by module: neither turned nor mirrored.
    const { modules } = create(sampleInput().scanAddress, { errorCorrectionLevel: 'M' });
    const module = (right - left) / modules.size;
    expect(module).toBeGreaterThan(0.5);
    for (let row = 0; row < modules.size; row++)
      for (let column = 0; column < modules.size; column++) {
        const at = { x: left + (column + 0.5) * module, y: top - (row + 0.5) * module };
        const black = filled.some(([a, , c]) => at.x > a!.x && at.x < c!.x && at.y > a!.y && at.y < c!.y);
        expect([row, column, black]).toEqual([row, column, Boolean(modules.get(row, column))]);
      }
    const sides = pages[0]!.paths
      .filter(({ painted, closed, points }) => painted === 'stroked' && closed && points.length === 4)
      .map(({ points }) => [points[1]!.x - points[0]!.x, points[2]!.y - points[1]!.y]);
    for (const side of [100, 101.6])
      expect(sides.some(([w, h]) => Math.abs(w! - side) < 1e-3 && Math.abs(h! - side) < 1e-3)).toBe(true);
  });
});

describe('letters', () => {
  it('with accents, Greek and Cyrillic print; one that the fonts lack prints as a box and is named', async () => {
    const { pages, sheetPages, missing } = await pagesOf(sampleInput());
    expect(missing).toEqual(['U+4E2D']);
    const labels = sheetPages.map(textOf).join(' ');
    expect(labels).toContain('Ärmel, Μανίκι, Рукав');
    expect(textOf(pages[0]!)).toContain('U+4E2D');
    const box = pages[0]!.paths.find(
      ({ painted, closed, points, width }) =>
        painted === 'stroked' &&
        closed &&
        points.length === 4 &&
        width < 0.25 &&
        points[1]!.x - points[0]!.x < 4
    );
    expect(box).toBeDefined();
  });

  it('are named every one, on a page of their own where the ticket has no room', async () => {
    const letters = Array.from({ length: 400 }, (_, i) => String.fromCodePoint(0x4e00 + i)).join('');
    const { pages, missing } = await pagesOf(sampleInput(sampleDocument(), { cloth: letters }));
    expect(missing.length).toBeGreaterThan(399);
    const ticket = pages.map(textOf).join(' ');
    for (const codePoint of missing) expect(ticket).toContain(codePoint);
  });

  it('that are written apart from their accent print as one', async () => {
    const apart = sampleInput(sampleDocument(), { cloth: 'cre\u0302pe' });
    const { pages, missing } = await pagesOf(apart);
    expect(textOf(pages[0]!)).toContain('crêpe');
    expect(missing).toEqual(['U+4E2D']);
  });
});

describe('every sheet', () => {
  it('says which lay, which sheet, which side is up, where warp and nap run, and where it lies', async () => {
    const { sheetPages } = await pagesOf(sampleInput());
    expect(sheetPages.length).toBeGreaterThan(4);
    for (const page of sheetPages) {
      const text = textOf(page);
      expect(text).toMatch(/Order 27 · revision 3 · 1a2b 3c4d 5e6f · Day dress, main cloth/);
      expect(text).toMatch(/\bwarp\b/);
      expect(text).toMatch(/\bnap\b/);
      expect(text).toContain('RIGHT SIDE UP');
      expect(text).toMatch(/Corner: zero [−+] [\d.]+ mm, near selvedge [−+] [\d.]+ mm/);
      expect(page.texts.filter(({ text: one }) => one === '100 mm')).toHaveLength(2);
      expect(text).not.toContain('RELEASED');
    }
  });

  it('of a revision that is not released says so, the ticket too', async () => {
    const { pages, sheetPages } = await pagesOf(sampleInput(sampleDocument(), { revision: unreleased }));
    for (const page of sheetPages)
      expect(page.texts.filter(({ text }) => text === 'NOT RELEASED').length).toBeGreaterThanOrEqual(2);
    expect(textOf(pages[0]!)).toContain('NOT RELEASED');
  });

  it('tells how to mark a drill hole on a single ply', async () => {
    const { sheetPages } = await pagesOf(sampleInput());
    expect(sheetPages.some((page) => textOf(page).includes('mark with thread or chalk, don’t pierce'))).toBe(
      true
    );
  });

  it('shows the frame where it runs: selvedges, zero line, end line', async () => {
    const { sheetPages } = await pagesOf(sampleInput());
    const all = sheetPages.map(textOf).join(' ');
    for (const wanted of ['near selvedge', 'far selvedge', 'zero line', 'end line, 167.5 cm'])
      expect(all).toContain(wanted);
  });

  it('of folded cloth says fold for the near selvedge', async () => {
    const document = sampleDocument();
    const layers = [
      { sideUp: 'wrong', nap: 'along' },
      { sideUp: 'right', nap: 'along' }
    ] as const;
    const folded = {
      ...document,
      strip: {
        ...document.strip,
        spread: [{ from: 0, to: 1480, layers: [...layers], fold: 'near' as const }]
      }
    };
    const { pages, sheetPages } = await pagesOf(sampleInput(folded));
    expect(sheetPages.map(textOf).join(' ')).toContain('near fold');
    expect(textOf(pages[0]!)).toContain('Folded lengthwise, selvedge on selvedge');
    expect(textOf(pages[0]!)).toContain('WRONG SIDE UP · FOLD: gives L + R');
  });
});

describe('the overview', () => {
  it('gives both ends of each grain line and the edges, by which a piece can be chalked', async () => {
    const { pages } = await pagesOf(sampleInput());
    const text = pages.map(textOf).find((one) => one.includes('grain line, tail'))!;
    // Skirt panel at (15, 75): grain from 225.6 + 15 … as the sample draws it.
    const skirt = sampleBook['v1/skirt']!.shape;
    const tail = ((skirt.grain.from.x + 15) / 10).toFixed(1);
    const head = ((skirt.grain.to.x + 15) / 10).toFixed(1);
    const across = ((skirt.grain.to.y + 75) / 10).toFixed(1);
    expect(text).toContain(`Skirt panel left Ada dress 38 · 1 ${tail} ${across} ${head} ${across}`);
  });

  it('in inches for a studio that reads them, on Letter', async () => {
    const { pages } = await pagesOf(
      sampleInput(sampleDocument(), { lengthUnit: 'in' }),
      choice({ kind: 'sheets', paper: 'Tabloid' })
    );
    expect(pages[0]!.width).toBeCloseTo(215.9, 3);
    expect(textOf(pages[0]!)).toContain('59 1/16 in, usable');
  });
});

describe('the map', () => {
  it('names every printed sheet, the four checks and the limit', async () => {
    const { pages, sheetPages } = await pagesOf(sampleInput());
    const map = pages.map(textOf).find((one) => one.includes('Map of the sheets'))!;
    for (const page of sheetPages)
      expect(map).toContain(page.texts.find(({ text }) => /^[A-Z]\d+$/.test(text))!.text);
    for (const wanted of ['A – B', 'A – D', 'A – C', 'B – D', 'More than 2 mm off'])
      expect(map).toContain(wanted);
  });
});

describe('making a guide', () => {
  it('tells how far it is, page by page', async () => {
    const told: number[] = [];
    const { pages } = await makeGuide(sampleInput(), sheets, fonts, ({ done, of }) => told.push(done / of));
    expect(told).toHaveLength(pages + 1);
    expect(told).toEqual([...told].sort((a, b) => a - b));
    expect(told.at(-1)).toBe(1);
  });

  it('gives the same bytes for the same revision, choice and time', async () => {
    const [a, b] = await Promise.all([1, 2].map(() => makeGuide(sampleInput(), sheets, fonts)));
    expect(Buffer.from(a!.bytes).equals(Buffer.from(b!.bytes))).toBe(true);
  });

  it('is refused when nothing lies on the cloth, and when nobody would tape so many sheets', async () => {
    const empty = { ...sampleDocument(), placements: [] };
    await expect(makeGuide(sampleInput(empty), sheets, fonts)).rejects.toThrow(GuideRefusal);
    const endless = sampleInput(sampleDocument(60));
    await expect(makeGuide(endless, choice({ kind: 'sheets', paper: 'A4' }), fonts)).rejects.toThrow(
      /larger paper/
    );
  });

  it('panels only: one page for each panel and hand, of its own size, without the cloth’s frame', async () => {
    const { sheetPages } = await pagesOf(sampleInput(), choice({ kind: 'panels' }));
    expect(sheetPages).toHaveLength(8);
    for (const page of sheetPages) expect(textOf(page)).not.toContain('Corner:');
    const skirt = sheetPages.find((page) => textOf(page).includes('Skirt panel'))!;
    const { cut } = sampleBook['v1/skirt']!.shape;
    const length = Math.max(...cut.map(({ x }) => x)) - Math.min(...cut.map(({ x }) => x));
    expect(skirt.width).toBeCloseTo(length + 12 + 9 + 20, 2);
  });
});
