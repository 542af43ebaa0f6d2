import { amount, count, length } from '../choices';
import { Construction } from '../construction';
import { CannotDraft, type Draft } from '../draft';
import { Pieces } from '../pieces';
import { rectangle } from './rectangle';

/*
 * Gathered and tiered skirts: rectangles, each tier so many times as long as what it is gathered into. Plain arithmetic.
 */

export const gatheredSkirt: Draft = {
  id: 'gathered-skirt',
  version: 1,
  name: 'Gathered or tiered skirt',
  about:
    'One to seven tiers of straight cloth, each gathered into the one above, the first into a waistband. Plain arithmetic: width × fullness.',
  needs: ['waist'],
  mayUse: ['hip'],
  choices: [
    length('length', 'Length', 'From the lower edge of the waistband to the hem.', {
      default: 700,
      min: 200,
      max: 1300
    }),
    count('tiers', 'Tiers', 'How many bands the length is parted into.', { default: 1, min: 1, max: 7 }),
    amount('fullness', 'Fullness', 'How many times as long each tier is as what it is gathered into.', {
      default: 1.8,
      min: 1.2,
      max: 3,
      unit: '×'
    }),
    length('ease', 'Ease at the waist', 'Added to the measured waist.', { default: 10, min: 0, max: 60 }),
    length('panel', 'Widest panel', 'What the cloth gives: tiers longer than this are parted evenly.', {
      default: 1300,
      min: 500,
      max: 2800
    }),
    length('band', 'Width of the waistband', 'Finished; it is cut double.', {
      default: 30,
      min: 15,
      max: 80
    }),
    length('overlap', 'Overlap of the waistband', 'Where it buttons or hooks.', {
      default: 30,
      min: 0,
      max: 60
    }),
    length('hem', 'Hem allowance', 'Turned up at the last tier.', { default: 30, min: 10, max: 80 })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const W = s.given('W', 'Waist', body.waist!);
    const e = s.given('e', 'Ease', chosen.number('ease'));
    const L = s.given('L', 'Length', chosen.number('length'));
    const tiers = chosen.number('tiers');
    const f = chosen.number('fullness');
    const around = s.length('Waistband, finished', W + e, 'W + e');
    const height = s.length('Height of a tier', L / tiers, `L ÷ ${tiers}`);
    if (height < 60)
      throw new CannotDraft(
        null,
        'tiers',
        'Tiers lower than 6 cm can’t be gathered into each other: take fewer.'
      );
    if (body.hip !== undefined && around * f < body.hip + 40)
      throw new CannotDraft(
        null,
        'fullness',
        'The first tier would not pass over the hip: take more fullness.'
      );
    const pieces = new Pieces();
    const band = chosen.number('band');
    const overlap = chosen.number('overlap');
    pieces.piece(
      rectangle('waistband', 'Waistband', around + overlap, 2 * band, {
        grain: 'along',
        notchesBelow: [overlap, overlap + around / 4, overlap + around / 2, overlap + (3 * around) / 4],
        note: 'Folded lengthwise. Its grain may run along or across, as the cloth wants.'
      })
    );
    let above = around;
    for (let tier = 1; tier <= tiers; tier++) {
      const length = s.length(
        `Tier ${tier}, all round`,
        above * f,
        `${tier === 1 ? 'waistband' : `tier ${tier - 1}`} × ${f}`
      );
      if (length > 40_000)
        throw new CannotDraft(
          null,
          'fullness',
          'More than 40 m round at the hem: take less fullness or fewer tiers.'
        );
      const panels = Math.max(tier === 1 ? 2 : 1, Math.ceil(length / chosen.number('panel')));
      const wide = s.length(`Tier ${tier}, a panel`, length / panels, `÷ ${panels} panels`);
      const id = `tier-${tier}`;
      pieces.piece(
        rectangle(id, `Tier ${tier}`, wide, height, {
          grain: 'down',
          howMany: panels,
          lower: tier === tiers ? { role: 'hem', allowance: chosen.number('hem') } : undefined
        })
      );
      pieces.seam(`Tier ${tier}, side to side`, [id, 'left'], [id, 'right'], { smooth: ['start', 'end'] });
      above = length;
    }
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: pieces.seams,
      totals: [{ level: 'waist', body: W, ease: e, gap: 0, finished: around }],
      bones: [],
      supplies: [],
      warnings: [],
      cautions: []
    };
  }
};
