import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defaultChoices } from '$lib/interchange/choices';
import { panelsFrom } from '$lib/interchange/panels';
import { readSvg } from '$lib/interchange/svg';
import type { Panel } from '$lib/pattern/panel';
import * as styles from '$lib/server/styles';
import { actions, load } from '../../src/routes/(app)/styles/[id]/+page.server';
import { load as loadList } from '../../src/routes/(app)/styles/+page.server';
import { draftsOf } from '../../src/routes/(app)/styles/[id]/panel-form';
import { svg } from '../fixtures/hostile/cases';
import { ending, eventFor, localsOf, makeCast, type Cast } from './cast';

let cast: Cast;
beforeAll(async () => {
  cast = await makeCast();
});
afterAll(() => cast.close());
const scope = () => cast.here.patternMaker.scope;

function panelsOf(...names: string[]): Panel[] {
  const reading = readSvg(
    svg(names.map((name, i) => `<rect id="${name}" x="${i * 200}" width="${100 + i}" height="80"/>`).join(''))
  );
  const choices = defaultChoices(reading);
  for (const panel of choices.panels) panel.drawn = 'sew';
  return panelsFrom(reading, choices).panels;
}
const create = (name: string, kind = 'skirt', ...panels: string[]) =>
  styles.create(
    scope(),
    { name, kind, note: '' },
    { panels: panelsOf(...(panels.length > 0 ? panels : ['Yoke', 'Gore'])) }
  );

/** The fields of a version's form as the page shows them. */
function fieldsOf(version: styles.StyleVersion): Record<string, string> {
  const fields: Record<string, string> = { basedOn: String(version.number), versionNote: '' };
  for (const draft of draftsOf(version.panels, 'cm')) {
    for (const [key, value] of Object.entries(draft))
      if (typeof value === 'string' && key !== 'id') fields[`${draft.id}.${key}`] = value;
      else if (value === true) fields[`${draft.id}.${key}`] = 'on';
    for (const [edge, values] of Object.entries(draft.edges))
      for (const [key, value] of Object.entries(values)) fields[`${draft.id}.${edge}.${key}`] = value;
  }
  return fields;
}

describe('the list of styles', () => {
  it('searches, sorts and pages within the studio, with the panels of the latest version', async () => {
    const { styleId } = await create('Zouave trousers', 'trousers');
    await create('Apron', 'apron');
    await styles.create(
      cast.elsewhere.owner.scope,
      { name: 'Foreign coat', kind: '', note: '' },
      { panels: panelsOf('Back') }
    );
    await styles.addVersion(scope(), styleId, { panels: panelsOf('A', 'B', 'C') }, 1);
    const list = (query: string) =>
      loadList(eventFor({ path: `/styles?${query}`, locals: localsOf(cast.here, 'cutter') })) as Promise<{
        styles: { rows: styles.ListedStyle[]; total: number };
      }>;
    const all = await list('sort=-name');
    expect(all.styles.rows.map(({ name }) => name)).toEqual(['Zouave trousers', 'Apron']);
    expect(all.styles.rows[0]).toMatchObject({ panelCount: 3, versions: 2 });
    expect((await list('q=TROUS')).styles.rows).toHaveLength(1);
    expect((await list('sort=panels')).styles.rows.map(({ panelCount }) => panelCount)).toEqual([2, 3]);
    await styles.archive(scope(), styleId, true);
    expect((await list('')).styles.total).toBe(1);
    expect((await list('show=archived')).styles.rows.map(({ id }) => id)).toEqual([styleId]);
  });
});

describe('a version', () => {
  it('comes from changed attributes and leaves the former one alone', async () => {
    const { styleId, versionId } = await create('Gored skirt');
    const former = await styles.readVersion(scope(), versionId);
    const fields = {
      ...fieldsOf(former),
      'p1.name': 'Waist yoke',
      'p1.howMany': '2',
      'p1.paired': 'on',
      'p1.e1.allowance': '2.5',
      'p1.e1.role': 'hem',
      'p2.role': 'lining',
      versionNote: 'hem deeper'
    };
    const end = await ending(() =>
      actions.version!(
        eventFor({ locals: localsOf(cast.here, 'patternMaker'), params: { id: styleId }, form: fields })
      )
    );
    expect(end).toMatchObject({ kind: 'redirect' });
    const version = await styles.versionOf(scope(), styleId);
    expect(version).toMatchObject({ number: 2, note: 'hem deeper' });
    expect(version.panels[0]).toMatchObject({ id: 'p1', name: 'Waist yoke', howMany: 2, paired: true });
    expect(version.panels[0]!.edges[0]).toMatchObject({ allowance: 25, role: 'hem' });
    expect(version.panels[0]!.edges[1]).toEqual(former.panels[0]!.edges[1]);
    expect(version.panels[1]!.role).toBe('lining');
    expect(await styles.readVersion(scope(), versionId)).toEqual(former);
  });

  it('is refused with words at the field, and nothing is saved', async () => {
    const { styleId, versionId } = await create('Plain skirt');
    const fields = {
      ...fieldsOf(await styles.readVersion(scope(), versionId)),
      'p1.howMany': '3',
      'p1.paired': 'on',
      'p2.e2.allowance': 'wide',
      'p2.name': 'yoke'
    };
    const answer = (await actions.version!(
      eventFor({ locals: localsOf(cast.here, 'owner'), params: { id: styleId }, form: fields })
    )) as unknown as { status: number; data: { errors: Record<string, string> } };
    expect(answer.status).toBe(400);
    expect(answer.data.errors['p1.howMany']).toMatch(/even/);
    expect(answer.data.errors['p2.e2.allowance']).toMatch(/length/);
    expect((await styles.versionOf(scope(), styleId)).number).toBe(1);
  });

  it('is refused when another one was saved meanwhile', async () => {
    const { styleId, versionId } = await create('Wrap skirt');
    const fields = fieldsOf(await styles.readVersion(scope(), versionId));
    await styles.addVersion(scope(), styleId, { panels: panelsOf('Wrap') }, 1);
    const answer = (await actions.version!(
      eventFor({ locals: localsOf(cast.here, 'owner'), params: { id: styleId }, form: fields })
    )) as unknown as { status: number; data: { errors: Record<string, string> } };
    expect(answer).toMatchObject({ status: 409 });
    expect(answer.data.errors['']).toMatch(/Version 2 was saved/);
  });
});

describe('who may', () => {
  it('a cutter sees styles and changes none; strangers see nothing', async () => {
    const { styleId } = await create('Circle skirt');
    const changes = ['words', 'version', 'archive', 'putBack'] as const;
    for (const action of changes) {
      const call = (locals: App.Locals) =>
        ending(() => actions[action]!(eventFor({ locals, params: { id: styleId }, form: { name: 'x' } })));
      expect(await call(localsOf(cast.here, 'cutter'))).toMatchObject({ kind: 'error', status: 403 });
      expect(await call(localsOf(cast.elsewhere, 'owner'))).toMatchObject({ kind: 'error', status: 404 });
      expect(await call(localsOf(cast.here, null))).toMatchObject({ kind: 'redirect' });
    }
    const page = await load(eventFor({ locals: localsOf(cast.here, 'cutter'), params: { id: styleId } }));
    expect(page).toMatchObject({ style: { name: 'Circle skirt', archived: false }, mayChange: false });
    expect(
      await ending(() =>
        load(eventFor({ locals: localsOf(cast.elsewhere, 'owner'), params: { id: styleId } }))
      )
    ).toMatchObject({ status: 404 });
  });
});
