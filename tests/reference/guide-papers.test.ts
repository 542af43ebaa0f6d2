import { describe, expect, it } from 'vitest';
import { makeGuide } from '$lib/guide/guide';
import { guideChoiceSchema } from '$lib/guide/guide-choice';
import { LONGEST_SIDE, paperNames, papers, UNITS_PER_MM, type PaperName } from '$lib/guide/papers';
import { guideFonts, sampleDocument, sampleInput } from '../unit/guide/sample-lay';
import { readGuide } from './read-guide';

/*
 * Paper sizes against the published ones, and as another program measures them in the file.
 */

/** ISO 216, A series, mm. */
const iso216: Partial<Record<PaperName, readonly [number, number]>> = {
  A0: [841, 1189],
  A1: [594, 841],
  A2: [420, 594],
  A3: [297, 420],
  A4: [210, 297]
};

/** ASME Y14.1, in: A and B are Letter and Tabloid. */
const asmeY141: Partial<Record<PaperName, readonly [number, number]>> = {
  Letter: [8.5, 11],
  Tabloid: [11, 17],
  'ASME C': [17, 22],
  'ASME D': [22, 34],
  'ASME E': [34, 44]
};

describe('papers', () => {
  it('have the sizes of ISO 216', () => {
    for (const [name, size] of Object.entries(iso216))
      expect([papers[name as PaperName].width, papers[name as PaperName].height]).toEqual(size);
  });

  it('have the sizes of ASME Y14.1, an inch being 25.4 mm', () => {
    for (const [name, [width, height]] of Object.entries(asmeY141)) {
      expect(papers[name as PaperName].width).toBeCloseTo(width * 25.4, 9);
      expect(papers[name as PaperName].height).toBeCloseTo(height * 25.4, 9);
    }
  });

  it('are measured in units of 1/72 inch (ISO 32000-1, 8.3.2.3), at most 14,400 of them (PDF Reference 1.7, Appendix C)', () => {
    expect(UNITS_PER_MM * 25.4).toBeCloseTo(72, 12);
    expect(LONGEST_SIDE * UNITS_PER_MM).toBeCloseTo(14_400, 9);
    expect(papers.A0.width * UNITS_PER_MM).toBeCloseTo(2383.94, 2);
    expect(papers.A0.height! * UNITS_PER_MM).toBeCloseTo(3370.39, 2);
  });
});

describe('a guide on every paper', () => {
  // One small piece is enough to see the page.
  const document = { ...sampleDocument(), placements: sampleDocument().placements.slice(6, 7) };
  for (const name of paperNames)
    it(`has pages of exactly ${name}, upright or on its side`, async () => {
      const { bytes, sheets } = await makeGuide(
        sampleInput(document),
        guideChoiceSchema.parse({ kind: 'sheets', paper: name }),
        guideFonts()
      );
      const pages = (await readGuide(bytes)).slice(-sheets);
      const { width, height } = papers[name];
      for (const page of pages) {
        const [short, long] = [page.width, page.height].sort((a, b) => a - b) as [number, number];
        if (height === null) {
          expect([page.width, page.height].some((side) => Math.abs(side - width) < 0.001)).toBe(true);
        } else {
          expect(short).toBeCloseTo(width, 3);
          expect(long).toBeCloseTo(height, 3);
        }
        expect(Math.max(page.width, page.height)).toBeLessThanOrEqual(LONGEST_SIDE + 1e-6);
      }
    });
});
