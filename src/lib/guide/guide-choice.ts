import { z } from 'zod';
import { customPaper, LONGEST_SIDE, paperNames, papers, SHORTEST_SIDE, type Paper } from './papers';

/*
 * What the person chose to print.
 */

export const guideKinds = ['whole', 'sheets', 'panels'] as const;
export type GuideKind = (typeof guideKinds)[number];

/** What a sheet must leave between its margins for the checks and the words. */
const LEAST_BETWEEN = 170;

const side = z
  .number()
  .min(SHORTEST_SIDE, `A sheet needs at least ${SHORTEST_SIDE} mm a side`)
  .max(LONGEST_SIDE, `A page can be at most ${LONGEST_SIDE} mm a side`);

/**
 * kind: the whole cloth on one page, sheets to tape up, or the panels alone. `paper` is for sheets, and for panels
 * that shall be tiled; without it each panel gets a page of its own size. Margins and overlap in millimetres.
 */
export const guideChoiceSchema = z
  .object({
    kind: z.enum(guideKinds),
    paper: z.enum([...paperNames, 'custom']).optional(),
    custom: z.object({ width: side, height: side }).optional(),
    /** What the printer can't reach, all round. */
    margin: z.number().min(0).max(50).default(10),
    /** What two neighbouring sheets both show. */
    overlap: z.number().min(5).max(100).default(15)
  })
  .superRefine((choice, context) => {
    if (choice.kind === 'sheets' && !choice.paper)
      context.addIssue({ code: 'custom', path: ['paper'], message: 'Choose a paper' });
    if (choice.kind !== 'whole' && choice.paper === 'custom' && !choice.custom)
      context.addIssue({ code: 'custom', path: ['custom'], message: 'Give the width and the height' });
    const paper = paperOf(choice);
    if (paper && paper.width - 2 * choice.margin < LEAST_BETWEEN)
      context.addIssue({
        code: 'custom',
        path: ['margin'],
        message: `${paper.name} leaves less than ${LEAST_BETWEEN} mm between these margins`
      });
  });
export type GuideChoice = z.infer<typeof guideChoiceSchema>;

/** The paper of a choice; null where pages take the size of what is on them. */
export function paperOf(
  choice: Pick<GuideChoice, 'kind'> & {
    paper?: GuideChoice['paper'] | undefined;
    custom?: GuideChoice['custom'] | undefined;
  }
): Paper | null {
  if (choice.kind === 'whole' || !choice.paper) return null;
  if (choice.paper !== 'custom') return papers[choice.paper];
  return choice.custom ? customPaper(choice.custom.width, choice.custom.height) : null;
}
