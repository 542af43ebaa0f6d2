/*
 * Every draft at the smallest, middle and largest size and on 1,000 seeded bodies: how many are refused and over which measurement,
 * whether outlines are simple, the worst seam, the worst corner meant to be smooth, the worst finished girth by level. Prints a table;
 * asserts nothing. Run: npx tsx --tsconfig tsconfig.json tests/bench/drafts.ts [draft] [bodies]
 */
import { drawDraft, totalOff, type Draft, type Level } from '../../src/lib/drafting/draft';
import type { Body } from '../../src/lib/drafting/measurement-points';
import { drafts } from '../../src/lib/drafting/registry';
import { isSimple } from '../../src/lib/geometry/polygon';
import { flatEdges, outlineOfEdges } from '../../src/lib/pattern/flat-edge';
import { bodies, largest, middle, smallest } from '../unit/drafting/bodies';

interface Tried {
  readonly drawn: number;
  /** Fault by measurement or choice, with how often. */
  readonly refused: ReadonlyMap<string, number>;
  readonly panels: number;
  readonly twisted: number;
  readonly seam: number;
  readonly corner: number;
  readonly girths: ReadonlyMap<Level, number>;
}

function tryDraft(draft: Draft, people: readonly Body[]): Tried {
  const refused = new Map<string, number>();
  const girths = new Map<Level, number>();
  let [drawn, panels, twisted, seam, corner] = [0, 0, 0, 0, 0];
  for (const body of people) {
    const result = drawDraft(draft, body);
    if (!result.ok) {
      const { measurement, choice, message } = result.faults[0]!;
      const name = measurement ?? choice ?? `unnamed: ${message}`;
      refused.set(name, (refused.get(name) ?? 0) + 1);
      continue;
    }
    drawn++;
    for (const panel of result.result.panels) {
      panels++;
      if (!isSimple(outlineOfEdges(flatEdges(panel, (p) => p)))) twisted++;
    }
    for (const walk of result.result.walks) {
      seam = Math.max(seam, Math.abs(walk.difference), ...walk.notches.map(({ off }) => Math.abs(off)));
      for (const end of walk.seam.smooth)
        if (walk.angles[end] !== null) corner = Math.max(corner, Math.abs(walk.angles[end] - 180));
    }
    for (const total of result.result.totals) {
      const off = totalOff(total);
      if (off !== null) girths.set(total.level, Math.max(girths.get(total.level) ?? 0, Math.abs(off)));
    }
  }
  return { drawn, refused, panels, twisted, seam, corner, girths };
}

const [only, many = '1000'] = process.argv.slice(2);
const crowd = bodies(Number(many), 2026);
const groups: readonly (readonly [string, readonly Body[]])[] = [
  ['smallest', [smallest]],
  ['middle', [middle]],
  ['largest', [largest]],
  [`${many} bodies`, crowd]
];
const mm = (value: number) => value.toFixed(2);
console.log(
  '| draft | bodies | refused | panels | not simple | worst seam mm | worst smooth corner ° | worst girth mm, by level |'
);
console.log('| --- | --- | --- | --: | --: | --: | --: | --- |');
for (const draft of drafts) {
  if (only && only !== 'all' && draft.id !== only) continue;
  for (const [name, people] of groups) {
    const tried = tryDraft(draft, people);
    const refused = [...tried.refused].map(([what, times]) => `${what} ${times}`).join(', ');
    const count = people.length - tried.drawn;
    const girths = [...tried.girths].map(([level, off]) => `${level} ${mm(off)}`).join(', ');
    console.log(
      `| ${draft.id} | ${name} | ${count} (${((100 * count) / people.length).toFixed(1)} %)${refused ? `: ${refused}` : ''} | ${tried.panels} | ${tried.twisted} | ${mm(tried.seam)} | ${mm(tried.corner)} | ${girths || '–'} |`
    );
  }
}
