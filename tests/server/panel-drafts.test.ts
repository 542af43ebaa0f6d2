import { afterAll, beforeAll, expect, it } from 'vitest';
import type { PanelDraft } from '$lib/pattern/panel-draft';
import { movePoint } from '$lib/pattern/edit-points';
import { withEdit } from '$lib/pattern/panel-draft';
import { waistcoat } from '$lib/server/demo/waistcoat';
import { newId } from '$lib/server/ids';
import * as panelDrafts from '$lib/server/panel-drafts';
import { Problem } from '$lib/server/problem';
import * as styles from '$lib/server/styles';
import { makeCast, type Cast } from './cast';

let cast: Cast;
beforeAll(async () => {
  cast = await makeCast();
});
afterAll(() => cast.close());
const scope = () => cast.here.patternMaker.scope;
const owner = () => cast.here.owner.scope;

const create = async () =>
  (await styles.create(scope(), { name: 'Waistcoat', kind: '', note: '' }, { panels: waistcoat })).styleId;

/** The copy with the corner of the front's side moved, and the edit named. */
function changed(document: PanelDraft, x: number): PanelDraft {
  const [front, ...others] = document.panels;
  const moved = movePoint(front!, { edge: 'side', at: 0 }, { x, y: 22 }).made!;
  return {
    ...document,
    panels: [moved, ...others],
    edits: withEdit(document.edits, moved, 'moved a corner of side')
  };
}

async function refusal(work: Promise<unknown>): Promise<Problem> {
  try {
    await work;
  } catch (problem) {
    if (problem instanceof Problem) return problem;
    throw problem;
  }
  throw new Error('It was not refused');
}

it('begins with the latest version, counts saves, and gives a repeated save its first answer', async () => {
  const style = await create();
  const fresh = await panelDrafts.read(scope(), style);
  expect(fresh).toMatchObject({ version: 0, savedAt: null, document: { base: 1, edits: [] } });
  const saveId = newId();
  const save = { version: 0, saveId, document: changed(fresh.document, 200) };
  expect(await panelDrafts.save(scope(), style, save, 5000)).toEqual({ version: 1, savedAt: 5000 });
  expect(await panelDrafts.save(scope(), style, save, 6000)).toEqual({ version: 1, savedAt: 5000 });
  const kept = await panelDrafts.read(owner(), style);
  expect(kept.version).toBe(1);
  expect(kept.document.panels[0]!.edges[1]!.from).toEqual({ x: 200, y: 22 });
});

it('answers two people at one desk with 409 and what the other one saved', async () => {
  const style = await create();
  const { document } = await panelDrafts.read(scope(), style);
  await panelDrafts.save(scope(), style, { version: 0, saveId: newId(), document: changed(document, 200) });
  const late = await refusal(
    panelDrafts.save(owner(), style, { version: 0, saveId: newId(), document: changed(document, 210) })
  );
  expect(late).toMatchObject({ status: 409, type: 'desk-out-of-date' });
  expect(late.extra.current).toMatchObject({ version: 1, savedBy: cast.here.patternMaker.name });
  expect((await panelDrafts.read(scope(), style)).document.panels[0]!.edges[1]!.from.x).toBe(200);
});

it('becomes the next version, which remembers what was changed by hand, over several versions', async () => {
  const style = await create();
  for (const [round, x] of [
    [1, 200],
    [2, 204]
  ] as const) {
    const { document } = await panelDrafts.read(scope(), style);
    expect(document.base).toBe(round);
    await panelDrafts.save(scope(), style, { version: 0, saveId: newId(), document: changed(document, x) });
    const made = await panelDrafts.saveAsVersion(scope(), style, { version: 1, note: '' });
    expect(made.number).toBe(round + 1);
    expect(await panelDrafts.handEditsOf(scope(), made.versionId)).toEqual([
      { panel: 'front', panelName: 'Front', what: 'moved a corner of side', times: round }
    ]);
    const version = await styles.readVersion(scope(), made.versionId);
    expect(version.panels[0]!.edges[1]!.from.x).toBe(x);
    expect(version.note).toBe('By hand: Front: moved a corner of side.');
  }
  expect(await panelDrafts.handEditsOf(scope(), (await styles.versionOf(scope(), style, 1)).id)).toEqual([]);
  expect((await panelDrafts.read(scope(), style)).version).toBe(0);
});

it('keeps the copy when the style got a newer version meanwhile, or a panel does not hold', async () => {
  const style = await create();
  const { document } = await panelDrafts.read(scope(), style);
  await panelDrafts.save(scope(), style, { version: 0, saveId: newId(), document: changed(document, 200) });
  await styles.addVersion(scope(), style, { panels: waistcoat }, 1);
  const late = await refusal(panelDrafts.saveAsVersion(scope(), style, { version: 1, note: '' }));
  expect(late).toMatchObject({ status: 409, type: 'style-out-of-date' });
  const crossed = structuredClone(changed(document, 200)) as PanelDraft;
  const edge = crossed.panels[0]!.edges[0]!;
  edge.segments[0] = { kind: 'line', to: { x: -60, y: 200 } };
  await panelDrafts.save(scope(), style, { version: 1, saveId: newId(), document: crossed });
  const broken = await refusal(panelDrafts.saveAsVersion(scope(), style, { version: 2, note: '' }));
  expect(broken.status).toBe(400);
  expect(broken.detail).toMatch(/^Front: .*crosses/);
  expect((await panelDrafts.read(scope(), style)).version).toBe(2);
  await panelDrafts.leave(scope(), style, 2);
  expect(await panelDrafts.read(scope(), style)).toMatchObject({ version: 0, document: { base: 2 } });
});

it('refuses what does not fit and what is another studio’s', async () => {
  const style = await create();
  const { document } = await panelDrafts.read(scope(), style);
  const save = (changes: object) =>
    refusal(
      panelDrafts.save(scope(), style, { version: 0, saveId: newId(), document: { ...document, ...changes } })
    );
  expect((await save({ base: 9 })).detail).toMatch(/no version 9/);
  expect((await save({ panels: [] })).status).toBe(400);
  expect((await save({ schema: 2 })).status).toBe(400);
  const foreign = cast.elsewhere.owner.scope;
  expect((await refusal(panelDrafts.read(foreign, style))).status).toBe(404);
  const version = await styles.versionOf(scope(), style);
  expect((await refusal(panelDrafts.handEditsOf(foreign, version.id))).status).toBe(404);
});
