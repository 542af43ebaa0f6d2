import { SaxesParser } from 'saxes';
import { describe, expect, it } from 'vitest';
import { drawDraft, type DraftResult } from '$lib/drafting/draft';
import { panelsFigure, sheetFigure } from '$lib/drafting/figure';
import { drafts } from '$lib/drafting/registry';
import { middle } from './bodies';

interface Read {
  readonly words: string[];
  readonly paths: string[];
  readonly view: number[];
}

/** Reads a figure as XML; anything malformed throws. */
function read(svg: string): Read {
  const found: Read = { words: [], paths: [], view: [] };
  const parser = new SaxesParser({ xmlns: true });
  let text = '';
  parser.on('error', (error) => {
    throw error;
  });
  parser.on('opentag', ({ name, attributes }) => {
    if (name === 'svg') found.view.push(...attributes.viewBox!.value.split(' ').map(Number));
    if (name === 'path') found.paths.push(attributes.d!.value);
    text = '';
  });
  parser.on('text', (more) => (text += more));
  parser.on('closetag', ({ name }) => {
    if (name === 'text') found.words.push(text);
  });
  parser.write(svg).close();
  return found;
}

describe.each(drafts.map((draft) => [draft.id, draft] as const))('figures of %s', (_, draft) => {
  const drawn = drawDraft(draft, middle);
  if (!drawn.ok) throw new Error(drawn.faults[0]!.message);
  const result: DraftResult = drawn.result;

  it('grow step by step in one frame, and name every point', () => {
    const { sheet } = result;
    const marks = sheet.steps.map((step) => step.marks.length);
    if (marks.every((count) => count === 0)) return expect(sheetFigure(sheet)).toBe('');
    const whole = read(sheetFigure(sheet));
    let before = 0;
    for (const { number } of sheet.steps) {
      const now = read(sheetFigure(sheet, number));
      expect(now.view).toEqual(whole.view);
      expect(now.paths.length).toBeGreaterThanOrEqual(before);
      before = now.paths.length;
    }
    for (const mark of sheet.steps.flatMap((step) => step.marks))
      if (mark.kind === 'point') expect(whole.words).toContain(mark.name);
    expect([...whole.paths, ...whole.view].join(' ')).not.toMatch(/NaN|Infinity|undefined/);
  });

  it('show every panel by name, its notches and lines', () => {
    const { words, paths } = read(panelsFigure(result.panels, 'a "title" & <more>'));
    expect(words).toEqual(result.panels.map(({ name }) => name));
    const least = result.panels.reduce(
      (sum, panel) => sum + panel.edges.length + panel.notches.length + panel.internalLines.length,
      0
    );
    expect(paths.length).toBeGreaterThanOrEqual(least);
    expect(paths.join(' ')).not.toMatch(/NaN|Infinity|undefined/);
  });
});
