import { describe, expect, it } from 'vitest';
import { doubts, pickByHighBust } from '$lib/drafting/plausibility';
import { bandAndCup, publishedTables } from '$lib/drafting/size-tables';
import { waistRadius } from '$lib/drafting/drafts/circle-skirt';
import { drawDraft } from '$lib/drafting/draft';
import { draftById } from '$lib/drafting/registry';
import { resolvePanel } from '$lib/pattern/resolve';
import { area } from '$lib/geometry/polygon';

describe('EN 13402-3, bands and cups', () => {
  it('the worked examples of a help page on the pictogram: 87/107 is 85D, 89/108 is 90D, 82/100 is 80C', () => {
    expect(bandAndCup(87, 107)).toEqual({ band: 85, cup: 'D' });
    expect(bandAndCup(89, 108)).toEqual({ band: 90, cup: 'D' });
    expect(bandAndCup(82, 100)).toEqual({ band: 80, cup: 'C' });
  });

  it('cups exclude their lower bound and include the upper one; bands run 58–62 to 60 … 98–102 to 100', () => {
    expect(
      [12, 12.1, 14, 14.1, 16, 18, 20, 22, 24, 26, 28].map((more) => bandAndCup(80, 80 + more)?.cup)
    ).toEqual(['AA', 'A', 'A', 'B', 'B', 'C', 'D', 'E', 'F', 'G', 'H']);
    expect(bandAndCup(80, 90)).toBeNull();
    expect([58, 62, 63, 67, 68, 72, 98, 102].map((under) => bandAndCup(under, under + 15)!.band)).toEqual([
      60, 60, 65, 65, 70, 70, 100, 100
    ]);
  });
});

describe('size tables', () => {
  it('EN 13402-3 (from memory): bust − waist is 16 and grows by steps of 4, then 6; hips from 110 on by 5', () => {
    const sizes = publishedTables.find(({ id }) => id === 'en-13402-3-women')!.sizes.map(({ body }) => body);
    const steps = (id: 'bust' | 'waist' | 'hip') =>
      sizes.slice(1).map((body, i) => Math.round(body[id]! - sizes[i]![id]!));
    expect(steps('bust')).toEqual([40, 40, 40, 40, 40, 40, 40, 60, 60, 60, 60, 60, 60, 60, 60]);
    expect(steps('waist')).toEqual(steps('bust'));
    expect(steps('hip')).toEqual([40, 40, 40, 40, 40, 40, 40, 50, 50, 50, 50, 50, 50, 50, 50]);
    for (const body of sizes) expect(body.bust! - body.waist!).toBeCloseTo(160, 6);
  });

  it('W. Aldrich, women’s block sizes (as reproduced, not checked against the original): 16 cm from bust to waist in every size', () => {
    for (const { body } of publishedTables.find(({ id }) => id === 'aldrich-women')!.sizes)
      expect(body.bust! - body.waist!).toBeCloseTo(160, 6);
  });

  it('every size of every table is a body without a refusal', () => {
    for (const table of publishedTables)
      for (const { size, body } of table.sizes)
        expect(
          doubts(body).filter(({ weight }) => weight === 'refused'),
          `${table.name} ${size}`
        ).toEqual([]);
  });

  it('full bust 2 in or more over the high bust: the base size goes by the high bust (fitting leaflets, Texas extension among them)', () => {
    expect(pickByHighBust({ bust: 960, highBust: 909 })).toBe(true);
    expect(pickByHighBust({ bust: 960, highBust: 911 })).toBe(false);
  });
});

describe('circle skirts, r = W ÷ (2πf)', () => {
  it('the table computed from the usual formula, cm and inches', () => {
    const rows: [number, number, number, number, number][] = [
      [60, 9.55, 12.73, 19.1, 38.2],
      [72, 11.46, 15.28, 22.92, 45.84],
      [88, 14.01, 18.67, 28.01, 56.02],
      [26, 4.138, 5.517, 8.276, 16.552],
      [36, 5.73, 7.639, 11.459, 22.918]
    ];
    for (const [W, ...radii] of rows)
      [1, 0.75, 0.5, 0.25].forEach((share, i) =>
        expect(Math.abs(waistRadius(W, share) - radii[i]!)).toBeLessThan(0.006)
      );
  });

  it('allowances go on before dividing and come off the radius: 110 + 4 gives 18.15, less 1 is 17.15', () => {
    expect(waistRadius(114, 1)).toBeCloseTo(18.14, 1);
    expect(waistRadius(224, 0.5) / 2).toBeCloseTo(35.67, 0);
    // Our cut line at the waist lies nearer the centre than the sew line, by the allowance.
    const drawn = drawDraft(draftById('circle-skirt')!, { waist: 720 }, { ease: 0, gores: 2, length: 600 });
    if (!drawn.ok) throw new Error('It can be drawn.');
    const { cut, sew } = resolvePanel(drawn.result.panels[0]!);
    expect(area(cut)).toBeGreaterThan(area(sew));
  });

  it('W 72, length 60: radius 71.46 at the hem and 1.563 m² in all', () => {
    const drawn = drawDraft(draftById('circle-skirt')!, { waist: 720 }, { ease: 0, gores: 2, length: 600 });
    if (!drawn.ok) throw new Error('It can be drawn.');
    const sew = drawn.result.panels.map((panel) => area(resolvePanel(panel).sew) * panel.howMany);
    expect(sew.reduce((a, b) => a + b, 0) / 1e6).toBeCloseTo(1.563, 3);
  });
});

it('skirt block, worked example of the WikiEducator handout: W 72, H 96', () => {
  const drawn = drawDraft(draftById('skirt-block')!, { waist: 720, hip: 960, waistToHip: 206 });
  if (!drawn.ok) throw new Error('It can be drawn.');
  const value = (title: string) => {
    const step = drawn.result.sheet.steps.find((one) => one.title === title)!;
    return step.value?.kind === 'length' ? step.value.mm / 10 : NaN;
  };
  expect(value('Half width')).toBeCloseTo(50.5, 6);
  expect(value('Back hip')).toBeCloseTo(26, 6);
  expect(value('Front hip')).toBeCloseTo(24.5, 6);
  expect(value('Back waist with its dart')).toBeCloseTo(21.2, 6);
  expect(value('Front waist with its dart')).toBeCloseTo(20, 6);
  expect(drawn.result.totals[0]!.finished / 10).toBeCloseTo(74.4, 2);
});
