import { describe, expect, it } from 'vitest';
import { defaultsOf, type Choice } from '$lib/drafting/choices';
import { drawDraft, totalOff, type DraftResult } from '$lib/drafting/draft';
import { drafts } from '$lib/drafting/registry';
import { area } from '$lib/geometry/polygon';
import { resolvePanel } from '$lib/pattern/resolve';
import { openPanelSet } from '$lib/pattern/panel-set';
import { randomFrom } from '$lib/settle/random';
import { runs } from '../../runs';
import { bodies, largest, middle, smallest } from './bodies';

const drawn = (result: ReturnType<typeof drawDraft>): DraftResult => {
  if (!result.ok) throw new Error(result.faults.map(({ message }) => message).join(' '));
  return result.result;
};

/** Every seam within the tolerance, and every finished girth that the draft sets itself. */
function expectSound(result: DraftResult): void {
  for (const walk of result.walks) {
    expect(Math.abs(walk.difference), walk.seam.name).toBeLessThan(0.5);
    expect(
      walk.findings.filter(({ kind }) => kind !== 'corner').map(({ message }) => message),
      walk.seam.name
    ).toEqual([]);
    for (const end of walk.seam.smooth) {
      const angle = walk.angles[end];
      if (angle !== null) expect(Math.abs(angle - 180), `${walk.seam.name}, ${end}`).toBeLessThan(1);
    }
  }
  const waist = result.totals.find(({ level }) => level === 'waist');
  if (waist) expect(Math.abs(totalOff(waist)!), 'waist').toBeLessThan(1);
}

/** Any value that a choice allows. */
function anyOf(choice: Choice, random: () => number): number | string | boolean {
  switch (choice.kind) {
    case 'length':
      return choice.min + random() * (choice.max - choice.min);
    case 'number': {
      const value = choice.min + random() * (choice.max - choice.min);
      return choice.whole ? Math.round(value) : value;
    }
    case 'oneOf':
      return choice.options[Math.floor(random() * choice.options.length)]!.value;
    case 'yesNo':
      return random() < 0.5;
  }
}

describe.each(drafts.map((draft) => [draft.id, draft] as const))('%s', (_, draft) => {
  it.each([
    ['smallest', smallest],
    ['middle', middle],
    ['largest', largest]
  ] as const)('is drawn for the %s body: panels that can be laid, seams that meet', (_size, body) => {
    const result = drawn(drawDraft(draft, body));
    expectSound(result);
    openPanelSet({ schema: 1, panels: result.panels });
    for (const panel of result.panels) expect(area(resolvePanel(panel).cut)).toBeGreaterThan(0);
    expect(result.sheet.steps.length).toBeGreaterThan(1);
    expect(result.sheet.steps.map(({ number }) => number)).toEqual(
      result.sheet.steps.map((_step, i) => i + 1)
    );
  });

  it('gives the same panels for the same numbers', () => {
    expect(drawDraft(draft, middle)).toEqual(drawDraft(draft, middle));
  });

  it(`refuses at most one in a hundred of ${runs(60)} bodies, and says why; the rest are sound`, () => {
    const all = bodies(runs(60), 20);
    const refused: string[] = [];
    for (const body of all) {
      const result = drawDraft(draft, body);
      if (result.ok) expectSound(result.result);
      else refused.push(result.faults[0]!.message);
    }
    expect(refused.length, refused.join('\n')).toBeLessThanOrEqual(Math.ceil(all.length / 100));
  }, 60_000);

  it('takes any choice within its range, or names the choice or measurement that does not go', () => {
    const random = randomFrom(5);
    let sound = 0;
    for (let k = 0; k < runs(40); k++) {
      const values = Object.fromEntries(draft.choices.map((choice) => [choice.id, anyOf(choice, random)]));
      const result = drawDraft(draft, middle, values);
      if (result.ok) {
        expectSound(result.result);
        sound++;
      } else for (const fault of result.faults) expect(fault.message.length).toBeGreaterThan(20);
    }
    expect(sound).toBeGreaterThan(runs(40) / 2);
  }, 60_000);

  it('names a missing measurement and a choice out of its range', () => {
    for (const id of draft.needs) {
      const { [id]: _left, ...rest } = middle;
      const result = drawDraft(draft, rest);
      expect(result.ok ? [] : result.faults.map(({ measurement }) => measurement)).toEqual([id]);
    }
    const choice = draft.choices.find(({ kind }) => kind === 'length')!;
    const result = drawDraft(draft, middle, { ...defaultsOf(draft.choices), [choice.id]: 99_999 });
    expect(result.ok ? [] : result.faults.map((fault) => fault.choice)).toEqual([choice.id]);
  });
});

it('more girth gives more cloth', () => {
  const areas = (body: typeof middle) =>
    drafts.map((draft) =>
      drawn(drawDraft(draft, body))
        .panels.map((panel) => area(resolvePanel(panel).cut) * panel.howMany)
        .reduce((sum, one) => sum + one, 0)
    );
  const [small, large] = [areas(smallest), areas(largest)];
  drafts.forEach((draft, i) => expect(large[i]!, draft.id).toBeGreaterThan(small[i]!));
});
