import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { publishedTables } from '$lib/drafting/size-tables';
import * as clients from '$lib/server/clients';
import { database } from '$lib/server/database';
import * as draftRuns from '$lib/server/draft-runs';
import { readMeasurements } from '$lib/server/measurement-form';
import * as sets from '$lib/server/measurement-sets';
import * as sizeCharts from '$lib/server/size-charts';
import * as styles from '$lib/server/styles';
import { makeCast, type Cast } from './cast';

let cast: Cast;
let client: string;
beforeAll(async () => {
  cast = await makeCast();
  client = await clients.create(cast.here.owner.scope, {
    name: 'Marit',
    email: 'marit@far.example',
    phone: '',
    note: ''
  });
});
afterAll(() => cast.close());

const head = { takenOn: '2026-05-31', takenBy: 'Piet' };
const read = (values: Record<string, string>, unit: 'cm' | 'in' = 'cm') =>
  readMeasurements({ ...head, ...values }, unit);

describe('a form of measurements', () => {
  it('takes centimetres and inches with fractions as typed, two readings, left and right', () => {
    const form = read({
      bust: '36 1/2"',
      'bust.second': '92.5',
      waist: '71.4',
      'armLength.left': '58',
      'armLength.right': '59'
    });
    expect(form.ok && form.set.measured).toEqual([
      { point: 'bust', side: 'both', mm: 927.1, typed: '36 1/2"', second: { mm: 925, typed: '92.5' } },
      { point: 'waist', side: 'both', mm: 714, typed: '71.4', second: null },
      { point: 'armLength', side: 'left', mm: 580, typed: '58', second: null },
      { point: 'armLength', side: 'right', mm: 590, typed: '59', second: null }
    ]);
  });

  it('asks to measure again when two readings differ by more than a centimetre, and takes them on the word that it was done', () => {
    const values = { bust: '92', 'bust.second': '93.2' };
    const doubted = read(values);
    expect(doubted).toMatchObject({
      ok: false,
      onlyDoubts: true,
      errors: { bust: expect.stringContaining('measure again') }
    });
    expect(read({ ...values, sure: 'yes' }).ok).toBe(true);
    expect(read({ bust: '92', 'bust.second': '92.9' }).ok).toBe(true);
  });

  it('refuses what no body has, whatever is said', () => {
    expect(read({ bust: '92', underBust: '95', sure: 'yes' })).toMatchObject({
      ok: false,
      onlyDoubts: false
    });
    expect(read({ waist: '20', sure: 'yes' })).toMatchObject({
      ok: false,
      errors: { waist: expect.stringContaining('45 cm') }
    });
    expect(read({ waist: 'wide' })).toMatchObject({ ok: false });
    expect(read({})).toMatchObject({ ok: false, errors: { '': expect.any(String) } });
    expect(read({ takenOn: '2026-02-30', waist: '70' })).toMatchObject({
      ok: false,
      errors: { takenOn: expect.any(String) }
    });
  });
});

describe('sets of measurements', () => {
  it('are dated, kept beside each other, and never another studio’s', async () => {
    const { scope } = cast.here.patternMaker;
    const first = read({ waist: '72', hip: '96' });
    const later = read({ takenOn: '2026-06-30', waist: '74', hip: '96' });
    if (!first.ok || !later.ok) throw new Error('The forms hold.');
    const a = await sets.create(scope, client, first.set);
    const b = await sets.create(scope, client, later.set);
    expect((await sets.list(scope, client)).map(({ id }) => id)).toEqual([b, a]);
    expect((await sets.read(scope, a)).measured.find(({ point }) => point === 'waist')?.mm).toBe(720);
    await expect(sets.read(cast.elsewhere.owner.scope, a)).rejects.toMatchObject({ status: 404 });
    await expect(sets.create(cast.elsewhere.owner.scope, client, first.set)).rejects.toMatchObject({
      status: 404
    });
  });

  it('give the mean of two readings and the larger side', () => {
    expect(
      sets.bodyOf([
        { point: 'bust', side: 'both', mm: 920, typed: '', second: { mm: 926, typed: '' } },
        { point: 'wrist', side: 'left', mm: 158, typed: '', second: null },
        { point: 'wrist', side: 'right', mm: 161, typed: '', second: null }
      ])
    ).toEqual({ bust: 923, wrist: 161 });
  });
});

describe('size tables of a studio', () => {
  it('go out as CSV and come back the same', () => {
    for (const table of publishedTables)
      for (const unit of ['cm', 'in'] as const) {
        const back = sizeCharts.readCsv(sizeCharts.toCsv(table, unit));
        expect(back.map(({ size }) => size)).toEqual(table.sizes.map(({ size }) => size));
        back.forEach(({ body }, i) => {
          for (const [id, mm] of Object.entries(table.sizes[i]!.body))
            expect(body[id as keyof typeof body]).toBeCloseTo(mm, 1);
        });
      }
  });

  it('say row and column of what can’t be read', () => {
    const wrong = (text: string) => {
      try {
        sizeCharts.readCsv(text);
        return '';
      } catch (refusal) {
        return (refusal as Error & { detail: string }).detail;
      }
    };
    expect(wrong('point,unit,S,M\nwaist,cm,64,x')).toContain('Row 2, size M');
    expect(wrong('point,unit,S\nshoe,cm,64')).toContain('“shoe” is no measurement point');
    expect(wrong('point,unit,S,S\nwaist,cm,64,66')).toContain('stands there twice');
    expect(wrong('point,unit,S\nwaist,ell,64')).toContain('column 2');
    expect(wrong('point,unit,S\nbust,cm,80\nunderBust,cm,90')).toContain('Size S');
    expect(wrong('')).toContain('first row');
  });
});

describe('a draft run', () => {
  it('is drawn for measurements, kept as a style once, and says what the order was drafted for', async () => {
    const { scope } = cast.here.patternMaker;
    const client = await clients.create(scope, { name: 'Sunniva', email: '', phone: '', note: '' });
    const set = read({ waist: '72 cm' });
    if (!set.ok) throw new Error('The form holds.');
    const id = await draftRuns.create(
      scope,
      'circle-skirt',
      { kind: 'set', set: await sets.create(scope, client, set.set) },
      { gores: 4 }
    );
    const kept = await draftRuns.keep(scope, id, { name: 'Marit’s skirt' });
    const version = await styles.readVersion(scope, kept.versionId);
    expect(version.panels[0]).toMatchObject({ howMany: 4 });
    expect(await draftRuns.behindVersion(scope, kept.versionId)).toMatchObject({
      measuredOn: '2026-05-31',
      clientId: client,
      newer: null
    });
    const later = readMeasurements({ ...head, takenOn: '2026-07-02', waist: '74 cm' }, 'cm');
    if (!later.ok) throw new Error('The form holds.');
    const again = await sets.create(scope, client, later.set);
    expect(await draftRuns.behindVersion(scope, kept.versionId)).toMatchObject({
      measuredOn: '2026-05-31',
      newer: { id: again, takenOn: '2026-07-02' }
    });
    await expect(draftRuns.keep(scope, id, { name: 'Again' })).rejects.toMatchObject({ status: 409 });
    await expect(draftRuns.read(cast.elsewhere.owner.scope, id)).rejects.toMatchObject({ status: 404 });
  });

  it('is refused with the measurement that is missing', async () => {
    const { scope } = cast.here.patternMaker;
    const set = read({ hip: '96' });
    if (!set.ok) throw new Error('The form holds.');
    const source = { kind: 'set' as const, set: await sets.create(scope, client, set.set) };
    await expect(draftRuns.create(scope, 'circle-skirt', source, {})).rejects.toMatchObject({
      status: 400,
      extra: { fields: { 'point.waist': expect.any(String) } }
    });
  });
});

describe('erasing a client', () => {
  it('leaves nothing of the person, and keeps outlines and order under a neutral name', async () => {
    const { scope } = cast.here.owner;
    const id = await clients.create(scope, {
      name: 'Ottilie',
      email: 'ottilie@far.example',
      phone: '555',
      note: 'left hip'
    });
    const set = read({ waist: '69.3 cm' });
    if (!set.ok) throw new Error('The form holds.');
    const run = await draftRuns.create(
      scope,
      'circle-skirt',
      { kind: 'set', set: await sets.create(scope, id, set.set) },
      {}
    );
    const { versionId } = await draftRuns.keep(scope, run, { name: 'Skirt' });
    await clients.erase(scope, id);
    for (const table of ['clients', 'measurement_sets', 'measurements', 'draft_runs'])
      expect(JSON.stringify(await database()(table).select('*'))).not.toMatch(
        /Ottilie|ottilie|555|left hip|69\.3|693/
      );
    expect((await styles.readVersion(scope, versionId)).panels).toHaveLength(1);
    expect(() => draftRuns.drawn({ erased: true, draft: 'circle-skirt' } as never)).toThrow();
    await expect(
      clients.update(scope, id, 2, { name: 'X', email: '', phone: '', note: '' })
    ).rejects.toMatchObject({ status: 409 });
  });
});
