import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defaultChoices } from '$lib/interchange/choices';
import * as files from '$lib/server/files';
import { readDrawing } from '$lib/server/import-reader';
import * as imports from '$lib/server/imports';
import * as styles from '$lib/server/styles';
import { GET as getFile } from '../../src/routes/api/files/[id]/+server';
import {
  actions as importActions,
  load as loadImport
} from '../../src/routes/(app)/styles/imports/[id]/+page.server';
import { actions as uploadActions, load as loadUpload } from '../../src/routes/(app)/styles/new/+page.server';
import { hostileCases, svg } from '../fixtures/hostile/cases';
import { ending, eventFor, localsOf, makeCast, type Cast } from './cast';

let cast: Cast;
beforeAll(async () => {
  cast = await makeCast();
});
afterAll(() => cast.close());

const sample = (name: string) => ({ name, bytes: new Uint8Array(readFileSync(`static/${name}`)) });
const scope = () => cast.here.patternMaker.scope;
const bytesOf = (text: string) => new TextEncoder().encode(text);

async function confirmAll(
  id: string,
  change: (choices: ReturnType<typeof defaultChoices>) => void = () => {},
  mode: 'replace' | 'add' = 'replace'
) {
  const { reading } = await imports.read(scope(), id);
  const choices = defaultChoices(reading!);
  for (const panel of choices.panels) panel.drawn = 'sew';
  change(choices);
  return imports.confirm(scope(), id, {
    choices,
    words: { name: 'Bodice', kind: 'bodice', note: '' },
    versionNote: 'as uploaded',
    mode
  });
}

describe('hostile drawings in the worker', () => {
  it('are each answered, and none hurts the server', async () => {
    const answers = await Promise.all(hostileCases.map(({ bytes }) => readDrawing(bytes)));
    hostileCases.forEach(({ name, answer }, i) => {
      const got = answers[i]!;
      if ('refused' in answer)
        expect(got, name).toMatchObject({
          refused: { kind: answer.refused, message: expect.stringMatching(answer.says) }
        });
      else
        expect('reading' in got && got.reading.findings, name).toContainEqual(
          expect.objectContaining({ kind: answer.finding })
        );
    });
  });

  it('are stopped when they need too much memory', async () => {
    const curves = 'c9000 -9000 9000 9000 0 50'.repeat(50);
    const wide = svg(Array.from({ length: 1900 }, (_, i) => `<path d="M${i} ${i}${curves}z"/>`).join(''));
    expect(await readDrawing(bytesOf(wide))).toMatchObject({ refused: { kind: 'too-much-memory' } });
  });

  it('are stopped when they take too long', async () => {
    const slow = svg(
      Array.from(
        { length: 1500 },
        (_, i) => `<path d="M${i} 0C0 ${9000 + i} 9000 0 ${i} ${9000 + i}Z"/>`
      ).join('')
    );
    expect(await readDrawing(bytesOf(slow), 30)).toMatchObject({ refused: { kind: 'too-long' } });
    expect(await readDrawing(sample('sample.svg').bytes)).toHaveProperty('reading');
  });
});

describe('an upload', () => {
  it.each(['sample.svg', 'sample.dxf'])('%s becomes a style with its first version', async (name) => {
    const id = await imports.create(scope(), sample(name));
    expect(await imports.read(scope(), id)).toMatchObject({ state: 'read', fileName: name });
    const saved = await confirmAll(id, (choices) =>
      choices.panels.forEach((panel) => (panel.drawn = name.endsWith('dxf') ? 'cut' : 'sew'))
    );
    if (!saved.ok) throw new Error(JSON.stringify(saved.problems));
    const version = await styles.versionOf(scope(), saved.styleId);
    expect(version).toMatchObject({
      number: 1,
      panelCount: 4,
      note: 'as uploaded',
      createdBy: 'Piet',
      source: { name }
    });
    expect(version.panels.filter(({ paired }) => paired)).toHaveLength(2);
    expect((await imports.read(scope(), id)).state).toBe('saved');
    const again = {
      choices: { scale: 1, panels: [] },
      words: { name: 'x', kind: '', note: '' },
      versionNote: '',
      mode: 'replace'
    } as const;
    await expect(
      imports.confirm(scope(), id, { ...again, choices: { scale: 1, panels: [] } })
    ).rejects.toMatchObject({ status: 409, type: 'already-saved' });
  });

  it('is kept as it came and given back only as a download', async () => {
    const upload = sample('sample.svg');
    const id = await imports.create(scope(), { ...upload, name: '../../etc/Kleid "ä".svg' });
    const { fileId, fileName } = await imports.read(scope(), id);
    expect(fileName).toBe('Kleid "ä".svg');
    const response = await getFile(
      eventFor<Parameters<typeof getFile>[0]>({
        params: { id: fileId },
        locals: localsOf(cast.here, 'cutter')
      })
    );
    expect(new Uint8Array(await response.arrayBuffer())).toEqual(upload.bytes);
    expect(response.headers.get('content-disposition')).toMatch(
      /^attachment; filename="Kleid _+\.svg"; filename\*=UTF-8''Kleid%20%22%C3%A4%22\.svg$/
    );
    expect(response.headers.get('x-content-type-options')).toBe('nosniff');
    expect(response.headers.get('content-security-policy')).toContain('sandbox');
  });

  it('that can’t be read says why and can be removed', async () => {
    const id = await imports.create(scope(), {
      name: 'broken.svg',
      bytes: bytesOf('<svg xmlns="http://www.w3.org/2000/svg"><g>')
    });
    const { state, error, fileId } = await imports.read(scope(), id);
    expect(state).toBe('failed');
    expect(error).toMatch(/not well-formed/);
    await imports.remove(scope(), id);
    await expect(imports.read(scope(), id)).rejects.toMatchObject({ status: 404 });
    await expect(files.read(scope(), fileId)).rejects.toMatchObject({ status: 404 });
  });

  it('that was interrupted is read again when it is looked at', async () => {
    const id = await imports.create(scope(), sample('sample.svg'));
    await cast.db('imports').where({ id }).update({ state: 'waiting', reading: null });
    await loadImport(eventFor({ params: { id }, locals: localsOf(cast.here, 'owner') }));
    expect((await imports.read(scope(), id)).state).toBe('read');
  });

  it('is not saved while a choice is missing', async () => {
    const id = await imports.create(scope(), sample('sample.svg'));
    const before = await cast.db('styles').count({ n: 'id' });
    const answer = await confirmAll(id, (choices) => (choices.panels[1]!.drawn = null));
    expect(answer).toMatchObject({ ok: false, problems: [{ outline: 'o2', field: 'drawn' }] });
    expect(await cast.db('styles').count({ n: 'id' })).toEqual(before);
    expect((await imports.read(scope(), id)).state).toBe('read');
  });

  it('for a style makes its next version; panels that keep their name keep their id', async () => {
    const first = await confirmAll(await imports.create(scope(), sample('sample.svg')));
    if (!first.ok) throw new Error('not saved');
    const former = await styles.versionOf(scope(), first.styleId);
    const facing = former.panels.find(({ name }) => name === 'Back neck facing')!;
    const one = svg(
      '<rect id="Back_neck_facing" width="240" height="90"/><rect id="Pocket" x="300" width="120" height="140"/>'
    );
    const id = await imports.create(scope(), { name: 'more.svg', bytes: bytesOf(one) }, first.styleId);
    const second = await confirmAll(id, () => {}, 'add');
    if (!second.ok) throw new Error(JSON.stringify(second.problems));
    const version = await styles.versionOf(scope(), first.styleId);
    expect(version.number).toBe(2);
    expect(version.panels.map(({ name }) => name).sort()).toEqual([
      'Back',
      'Back neck facing',
      'Front panel',
      'Pocket',
      'Side panel'
    ]);
    expect(version.panels.find(({ name }) => name === 'Back neck facing')!.id).toBe(facing.id);
    expect(new Set(version.panels.map((panel) => panel.id)).size).toBe(5);
    // The first version is untouched.
    expect(await styles.readVersion(scope(), former.id)).toEqual(former);
  });

  it('in two saves at once becomes one style', async () => {
    const id = await imports.create(scope(), sample('sample.svg'));
    const answers = await Promise.allSettled([confirmAll(id), confirmAll(id)]);
    expect(answers.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
    expect(answers.find(({ status }) => status === 'rejected')).toMatchObject({
      reason: { type: 'already-saved' }
    });
  });
});

describe('who may', () => {
  it('a cutter and a stranger neither upload nor look at uploads', async () => {
    const id = await imports.create(scope(), sample('sample.svg'));
    const upload = new FormData();
    upload.append('files', new Blob([readFileSync('static/sample.svg')]), 'sample.svg');
    const calls = (locals: App.Locals) => [
      () => loadUpload(eventFor({ locals })),
      () => uploadActions.default!(eventFor({ locals, form: upload })),
      () => loadImport(eventFor({ locals, params: { id } })),
      () => importActions.save!(eventFor({ locals, params: { id }, form: {} })),
      () => importActions.leaveOut!(eventFor({ locals, params: { id }, form: { outline: 'o1' } })),
      () => importActions.remove!(eventFor({ locals, params: { id }, form: {} }))
    ];
    for (const call of calls(localsOf(cast.here, 'cutter')))
      expect(await ending(call)).toMatchObject({ kind: 'error', status: 403 });
    for (const call of calls(localsOf(cast.here, null)))
      expect(await ending(call)).toMatchObject({ kind: 'redirect' });
    for (const call of calls(localsOf(cast.elsewhere, 'owner')).slice(2))
      expect(await ending(call)).toMatchObject({ kind: 'error', status: 404 });
    expect((await imports.read(scope(), id)).reading!.outlines).toHaveLength(4);
  });

  it('an upload for another studio’s style is refused', async () => {
    const saved = await confirmAll(await imports.create(scope(), sample('sample.svg')));
    if (!saved.ok) throw new Error('not saved');
    await expect(
      imports.create(cast.elsewhere.owner.scope, sample('sample.svg'), saved.styleId)
    ).rejects.toMatchObject({ status: 404 });
  });
});

describe('the preview’s form', () => {
  it('keeps what was typed and says at the fields what is missing', async () => {
    const id = await imports.create(scope(), sample('sample.svg'));
    const locals = localsOf(cast.here, 'patternMaker');
    const form = {
      'p0.take': 'on',
      'p0.name': 'Vorderteil',
      'p0.drawn': '',
      'p0.allowance': 'ten',
      'p0.howMany': '1',
      'p0.treatment': 'square',
      'p0.hand': 'right',
      'p0.role': 'main',
      'p0.turns': 'bothWays',
      'p0.grainTolerance': '0',
      styleName: ''
    };
    const answer = (await importActions.save!(eventFor({ locals, params: { id }, form }))) as unknown as {
      status: number;
      data: { errors: Record<string, string>; draft: { panels: { name: string; allowance: string }[] } };
    };
    expect(answer.status).toBe(400);
    expect(Object.keys(answer.data.errors).sort()).toEqual(['p0.allowance', 'styleName']);
    expect(answer.data.draft.panels[0]).toMatchObject({ name: 'Vorderteil', allowance: 'ten' });
  });

  it('saves without scripts what its fields say', async () => {
    const id = await imports.create(scope(), {
      name: 'pocket.svg',
      bytes: bytesOf(svg('<rect width="100" height="80"/>'))
    });
    const locals = localsOf(cast.here, 'patternMaker');
    const form = {
      'p0.take': 'on',
      'p0.name': 'Pocket',
      'p0.drawn': 'sew',
      'p0.allowance': '1,5 cm',
      'p0.edge.0.allowance': '3',
      'p0.edge.0.role': 'hem',
      'p0.howMany': '2',
      'p0.paired': 'on',
      'p0.treatment': 'mitred',
      'p0.hand': 'left',
      'p0.role': 'lining',
      'p0.turns': 'oneWay',
      'p0.grainTolerance': '2.5',
      'p0.grainAlong': 'x',
      'p0.grainConfirmed': 'on',
      measured: '10 cm',
      really: '20 cm',
      styleName: 'Pocket bag',
      kind: '',
      note: '',
      versionNote: '',
      mode: ''
    };
    const end = await ending(() => importActions.save!(eventFor({ locals, params: { id }, form })));
    expect(end).toMatchObject({ kind: 'redirect', status: 303 });
    const styleId = /styles\/([^?]+)/.exec((end as { location: string }).location)![1]!;
    const { panels } = await styles.versionOf(scope(), styleId);
    expect(panels[0]).toMatchObject({
      name: 'Pocket',
      howMany: 2,
      paired: true,
      hand: 'left',
      role: 'lining',
      turns: 'oneWay',
      grainTolerance: 2.5,
      grain: { confirmed: true }
    });
    expect(panels[0]!.edges.map(({ allowance, role }) => [allowance, role])).toEqual([
      [30, 'hem'],
      [15, 'seam'],
      [15, 'seam'],
      [15, 'seam']
    ]);
    expect(panels[0]!.edges[1]!.segments[0]!.to).toEqual({ x: 200, y: 0 });
    expect(panels[0]!.grain.from.y).toBe(panels[0]!.grain.to.y);
  });
});
