import { beforeAll, describe, expect, it } from 'vitest';
import { bustier } from '$lib/drafting/bustier/bustier';
import { drawDraft, type DraftResult } from '$lib/drafting/draft';
import { draftingSheetPdf } from '$lib/guide/drafting-sheet';
import { guideFonts } from '$lib/server/guide-fonts';
import { middle } from '../unit/drafting/bodies';
import { readGuide, type ReadPage } from './read-guide';

/*
 * The drafting sheet on paper, read back by another PDF program.
 */

describe('the drafting sheet on paper', () => {
  let result: DraftResult;
  let pages: ReadPage[];
  let all: string;

  beforeAll(async () => {
    const drawn = drawDraft(bustier, middle);
    if (!drawn.ok) throw new Error(drawn.faults[0]!.message);
    result = drawn.result;
    const bytes = await draftingSheetPdf(
      {
        studio: 'Hollin Lane',
        draft: bustier.name,
        body: 'Middle size',
        measured: '3 March',
        unit: 'in',
        at: Date.UTC(2026, 2, 4),
        choices: [{ label: 'Basque end', value: 'Blunt' }],
        result
      },
      await guideFonts()
    );
    pages = await readGuide(bytes);
    all = pages.map(({ texts }) => texts.map(({ text }) => text).join(' ')).join('\n');
  });

  it('is on A4 and says for whom, with whose measurements and what was chosen', () => {
    for (const { width, height } of pages) {
      expect(width).toBeCloseTo(210, 1);
      expect(height).toBeCloseTo(297, 1);
    }
    expect(all).toContain('Middle size, measured 3 March');
    expect(all).toContain('bust girth');
    expect(all).toMatch(/34 5\/8 in \(88 cm\)/);
    expect(all).toContain('Blunt');
    expect(all).toContain('Tight lacing');
  });

  it('has every step by number and title in its order, our readings marked, six to a page', () => {
    const titles = pages.flatMap(({ texts }) =>
      texts.map(({ text }) => /^(\d+)\. /.exec(text)?.[1]).filter((number) => number !== undefined)
    );
    expect(titles).toEqual(result.sheet.steps.map(({ number }) => String(number)));
    const marked = result.sheet.steps.filter(({ ourReading }) => ourReading).length;
    expect(marked).toBeGreaterThan(5);
    expect(all.split('~ our reading').length - 1).toBe(marked);
    const stepPages = pages.filter(({ texts }) => texts.some(({ text }) => /^\d+\. /.test(text)));
    expect(stepPages.length).toBe(Math.ceil((result.sheet.steps.length + 1) / 6));
  });

  it('keeps everything on the paper, and every figure in its cell', () => {
    for (const { paths, texts } of pages) {
      for (const { points } of paths)
        for (const { x, y } of points) {
          expect(x).toBeGreaterThan(8);
          expect(x).toBeLessThan(202);
          expect(y).toBeGreaterThan(8);
          expect(y).toBeLessThan(289);
        }
      for (const { x, y } of texts) {
        expect(x).toBeGreaterThan(8);
        expect(x).toBeLessThan(202);
        expect(y).toBeGreaterThan(8);
      }
    }
  });

  it('lists the seams that were walked and the bones', () => {
    for (const { seam } of result.walks) expect(all).toContain(seam.name);
    for (const { name } of result.bones) expect(all).toContain(name);
  });
});
