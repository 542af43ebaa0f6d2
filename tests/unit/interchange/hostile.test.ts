import { describe, expect, it } from 'vitest';
import { ReadingRefused } from '$lib/interchange/limits';
import { readPanelFile } from '$lib/interchange/read-file';
import { readingSchema } from '$lib/interchange/reading';
import { defaultChoices } from '$lib/interchange/choices';
import { panelsFrom } from '$lib/interchange/panels';
import { hostileCases } from '../../fixtures/hostile/cases';

function answerTo(bytes: Uint8Array) {
  try {
    return { reading: readPanelFile(bytes) };
  } catch (refusal) {
    if (refusal instanceof ReadingRefused) return { kind: refusal.kind, message: refusal.message };
    throw refusal;
  }
}

describe('broken and hostile drawings', () => {
  it('are at least forty', () => expect(hostileCases.length).toBeGreaterThanOrEqual(40));

  it.each(hostileCases)('$name', ({ bytes, answer }) => {
    const got = answerTo(bytes);
    if ('refused' in answer) {
      expect(got).toMatchObject({ kind: answer.refused });
      expect(got.message).toMatch(answer.says);
      return;
    }
    expect(got.reading, `refused: ${got.message}`).toBeDefined();
    const reading = got.reading!;
    expect(reading.findings).toContainEqual(
      expect.objectContaining({ kind: answer.finding, message: expect.stringMatching(answer.says) })
    );
    // Whatever was read can be stored, and can be turned into panels or answered.
    expect(readingSchema.safeParse(reading).error).toBeUndefined();
    const choices = defaultChoices(reading);
    for (const panel of choices.panels) panel.drawn = 'cut';
    const { panels, problems } = panelsFrom(reading, choices);
    expect(panels.length + problems.length).toBeGreaterThan(0);
  });
});
