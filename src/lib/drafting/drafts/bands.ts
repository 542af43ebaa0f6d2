import { count, length, oneOf } from '../choices';
import { Construction } from '../construction';
import { CannotDraft, type Draft } from '../draft';
import { Pieces } from '../pieces';
import { rectangle } from './rectangle';

/*
 * Waistbands, straps, ties, loops and bias strips: straight pieces whose length comes from the body, or from a seam elsewhere.
 */

const kinds = {
  waistband: 'Waistband',
  strap: 'Strap',
  tie: 'Tie',
  loop: 'Loop',
  bias: 'Bias strip'
} as const;
type Kind = keyof typeof kinds;

export const bands: Draft = {
  id: 'bands',
  version: 1,
  name: 'Bands, straps, ties, loops, bias strips',
  about:
    'A straight piece that is folded lengthwise: its length from the waist, or typed from the seam that it is sewn to.',
  needs: [],
  mayUse: ['waist'],
  choices: [
    oneOf(
      'kind',
      'What it is',
      'Decides where the length comes from and which way the grain runs.',
      (Object.entries(kinds) as [Kind, string][]).map(([value, word]) => [value, word] as const)
    ),
    length(
      'seam',
      'Length of the seam',
      'For straps, ties, loops and bias strips: the finished length of one.',
      {
        default: 400,
        min: 20,
        max: 6000
      }
    ),
    length('width', 'Finished width', 'It is cut double.', { default: 30, min: 4, max: 200 }),
    count('pieces', 'How many', 'Of one order line.', { default: 1, min: 1, max: 40 }),
    length('ease', 'Ease at the waist', 'For a waistband: added to the measured waist.', {
      default: 10,
      min: 0,
      max: 60
    }),
    length('overlap', 'Overlap', 'For a waistband: where it buttons or hooks.', {
      default: 30,
      min: 0,
      max: 80
    }),
    length('longest', 'Longest strip', 'A bias strip that is longer is joined of equal strips.', {
      default: 900,
      min: 200,
      max: 3000
    })
  ],
  draw(body, chosen) {
    const s = new Construction();
    const kind = chosen.word('kind') as Kind;
    const width = s.given('w', 'Finished width', chosen.number('width'));
    const pieces = new Pieces();
    if (kind === 'waistband' && body.waist === undefined)
      throw new CannotDraft('waist', null, 'A waistband can’t be drawn without it.');
    const W = body.waist ?? 0;
    const around = W + chosen.number('ease');
    const whole =
      kind === 'waistband'
        ? s.length('Length', around + chosen.number('overlap'), 'W + ease + overlap')
        : s.length('Length', s.given('l', 'Length of the seam', chosen.number('seam')), 'l');
    const double = s.length('Width, cut double', 2 * width, '2 w');
    const parts = kind === 'bias' ? Math.ceil(whole / chosen.number('longest')) : 1;
    if (parts > 1) s.length('One strip', whole / parts, `length ÷ ${parts}`);
    pieces.piece(
      rectangle(kind, kinds[kind], whole / parts, double, {
        grain: kind === 'bias' ? 'bias' : 'along',
        howMany: chosen.number('pieces') * parts,
        ...(kind === 'loop' || kind === 'bias' ? { allowance: 6 } : {}),
        ...(kind === 'waistband'
          ? {
              notchesBelow: [0, 0.25, 0.5, 0.75].map((share) => chosen.number('overlap') + share * around)
            }
          : {}),
        note: 'Folded lengthwise.'
      })
    );
    return {
      panels: pieces.panels,
      sheet: s.sheet(),
      seams: [],
      totals:
        kind === 'waistband'
          ? [{ level: 'waist' as const, body: W, ease: chosen.number('ease'), gap: 0, finished: around }]
          : [],
      bones: [],
      supplies: [],
      warnings: [],
      cautions: []
    };
  }
};
