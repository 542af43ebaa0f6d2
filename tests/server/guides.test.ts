import { createHash } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { PDFDocument } from 'pdf-lib';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { guideChoiceSchema } from '$lib/guide/guide-choice';
import { check } from '$lib/lay/check';
import { KEPT_LAY_SCHEMA, type KeptLay } from '$lib/lay/kept-lay';
import * as guides from '$lib/server/guides';
import { newId } from '$lib/server/ids';
import { JobRunner } from '$lib/server/job-runner';
import * as jobs from '$lib/server/jobs';
import type { Role } from '$lib/server/permissions';
import { actions, load } from '../../src/routes/(app)/lays/[id]/guides/+page.server';
import { GET as fetchFile } from '../../src/routes/api/guides/[job]/file/+server';
import { POST as askFor } from '../../src/routes/api/revisions/[id]/guides/+server';
import { load as scan } from '../../src/routes/r/[hash]/+page.server';
import { sampleBook, sampleDocument } from '../unit/guide/sample-lay';
import { ending, eventFor, localsOf, makeCast, signedOut, type Cast, type House } from './cast';

let cast: Cast;
let runner: JobRunner;
let folder: string;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'guides-'));
  cast = await makeCast(path.join(folder, 'db.sqlite'));
  jobs.registerJob('guide', guides.job);
  runner = new JobRunner();
});
afterEach(async () => {
  await runner.shutDown();
  await cast.close();
  rmSync(folder, { recursive: true });
});

const secrets = { client: 'Adelheid Lovejoy-Sternberg', price: 987654 };

/** A lay with one kept revision, written as rows. */
async function keptRevision(
  house: House,
  { released = false, document = sampleDocument() } = {}
): Promise<{ lay: string; revision: string; hash: string }> {
  const [order, cloth, lay, revision, now] = [newId(), newId(), newId(), newId(), Date.now()];
  const studio = { studio_id: house.id };
  await cast.db('orders').insert({
    ...studio,
    id: order,
    number: Math.floor(Math.random() * 1e9),
    client_name: secrets.client,
    stage: 'cutting',
    created_at: now,
    updated_at: now
  });
  await cast.db('cloths').insert({
    ...studio,
    id: cloth,
    name: 'Wool crêpe',
    full_width: 1500,
    usable_width: 1480,
    price: secrets.price,
    created_at: now,
    updated_at: now
  });
  await cast.db('lays').insert({
    ...studio,
    id: lay,
    order_id: order,
    cloth_id: cloth,
    name: 'Main cloth',
    state: released ? 'released' : 'open',
    version: 1,
    document: JSON.stringify(document),
    released_revision_id: released ? revision : null,
    created_by: house.owner.id,
    created_at: now,
    updated_at: now
  });
  const kept: KeptLay = {
    schema: KEPT_LAY_SCHEMA,
    document,
    panels: sampleBook,
    labels: {
      studio: house.name,
      lay: 'Main cloth',
      order: { number: 27, shortName: 'Adelheid L.' },
      cloth: { name: 'Wool crêpe', fibre: 'wool', colour: '#FFFDF8' }
    },
    keptAt: now + Math.random()
  };
  const bytes = Buffer.from(JSON.stringify(kept));
  const hash = createHash('sha256').update(bytes).digest('hex');
  await cast.db('lay_revisions').insert({
    ...studio,
    id: revision,
    lay_id: lay,
    number: 1,
    name: 'first',
    lay_version: 1,
    bytes,
    hash,
    verdict: JSON.stringify(check(document, sampleBook)),
    released_at: released ? now : null,
    created_by: house.owner.id,
    created_at: now
  });
  return { lay, revision, hash };
}

const ask = (role: Role | null, revision: string, json: unknown, house = cast.here) =>
  askFor(eventFor({ locals: localsOf(house, role), params: { id: revision }, json }));
const fetched = (role: Role | null, job: string, house = cast.here) =>
  fetchFile(eventFor({ locals: localsOf(house, role), params: { job } }));

describe('a cutting guide', () => {
  it('is asked for by a cutter, made in a thread, listed, and downloaded as a file', async () => {
    const { lay, revision } = await keptRevision(cast.here, { released: true });
    const answer = await ask('cutter', revision, { kind: 'sheets', paper: 'A1' });
    expect(answer.status).toBe(200);
    const { job } = (await answer.json()) as { job: string };
    await runner.drain();
    const done = await jobs.read(cast.here.cutter.scope, job);
    expect(done).toMatchObject({ state: 'done', error: null });
    const [listed] = await guides.list(cast.here.cutter.scope, lay);
    expect(listed).toMatchObject({ job, state: 'done', revision: { number: 1, name: 'first' } });
    expect(listed!.result!.missing).toEqual(['U+4E2D']);

    const file = await fetched('cutter', job);
    expect(file.headers.get('content-disposition')).toMatch(/^attachment;/);
    const bytes = new Uint8Array(await file.arrayBuffer());
    const pdf = await PDFDocument.load(bytes);
    expect(pdf.getPageCount()).toBe(listed!.result!.pages);
    expect(listed!.result!.sheets).toBeGreaterThan(1);
  });

  it('holds neither the client’s name nor a price, whoever prints it', async () => {
    const { revision } = await keptRevision(cast.here);
    const input = JSON.stringify(await guides.inputOf(cast.here.owner.scope, revision));
    expect(input).not.toContain(secrets.client);
    expect(input).not.toContain('Lovejoy');
    expect(input).not.toContain(String(secrets.price));
    expect(input).toContain('Adelheid L.');
  });

  it('says that it is not released until it is, and again once it is withdrawn', async () => {
    const kept = await keptRevision(cast.here, { released: true });
    const scope = cast.here.cutter.scope;
    expect((await guides.inputOf(scope, kept.revision)).revision.released).not.toBeNull();
    await cast.db('lay_revisions').where({ id: kept.revision }).update({ withdrawn_at: Date.now() });
    expect((await guides.inputOf(scope, kept.revision)).revision.released).toBeNull();
  });

  it('is refused in its own words when nothing lies on the cloth', async () => {
    const empty = { ...sampleDocument(), placements: [] };
    const { revision } = await keptRevision(cast.here, { document: empty });
    const { job } = await guides.create(
      cast.here.cutter.scope,
      revision,
      guideChoiceSchema.parse({ kind: 'whole' })
    );
    await runner.drain();
    const failed = await jobs.read(cast.here.cutter.scope, job);
    expect(failed.state).toBe('failed');
    expect(failed.error).toContain('No piece lies on the cloth');
  });

  it('refuses a choice that does not fit, at its place', async () => {
    const { revision } = await keptRevision(cast.here);
    for (const wrong of [
      { kind: 'sheets' },
      { kind: 'sheets', paper: 'custom' },
      { kind: 'sheets', paper: 'custom', custom: { width: 10, height: 10 } },
      { kind: 'sheets', paper: 'A4', margin: 50, overlap: 100 },
      { kind: 'posters' }
    ])
      expect((await ask('owner', revision, wrong)).status).toBe(400);
    expect(await cast.db('jobs').where({ kind: 'guide' })).toEqual([]);
  });

  it('of another studio can’t be asked for, seen, stopped or downloaded, nor by somebody signed out', async () => {
    const { lay, revision } = await keptRevision(cast.here);
    expect((await ask('owner', revision, { kind: 'whole' }, cast.elsewhere)).status).toBe(404);
    expect((await ask(null, revision, { kind: 'whole' })).status).toBe(401);
    const { job } = await guides.create(
      cast.here.owner.scope,
      revision,
      guideChoiceSchema.parse({ kind: 'whole' })
    );
    await runner.drain();
    expect((await fetched('owner', job)).status).toBe(200);
    expect((await fetched('owner', job, cast.elsewhere)).status).toBe(404);
    expect((await fetched(null, job)).status).toBe(401);
    await expect(guides.list(cast.elsewhere.owner.scope, lay)).rejects.toMatchObject({ status: 404 });
    const foreign = { locals: cast.elsewhere.owner.locals, params: { id: lay } };
    expect(await ending(() => load(eventFor(foreign)))).toMatchObject({ kind: 'error', status: 404 });
    for (const [name, form] of [
      ['make', { revision, kind: 'whole' }],
      ['stop', { job }]
    ] as const)
      expect(await ending(() => actions[name]!(eventFor({ ...foreign, form })))).toMatchObject({
        kind: 'error',
        status: 404
      });
  });
});

describe('the page of guides', () => {
  it('offers the released revision first and keeps what was typed when it does not fit', async () => {
    const { lay, revision } = await keptRevision(cast.here, { released: true });
    const call = { locals: cast.here.cutter.locals, params: { id: lay } };
    const form = {
      revision,
      kind: 'sheets',
      paper: 'custom',
      width: '5 mm',
      height: '',
      margin: '1 cm',
      overlap: ''
    };
    const refused = (await actions.make!(eventFor({ ...call, form }))) as {
      data: { values: Record<string, string>; errors: Record<string, string> };
    };
    expect(refused.data.values).toMatchObject({ width: '5 mm', margin: '1 cm' });
    expect(refused.data.errors.width).toMatch(/too short/);
    const made = await ending(() =>
      actions.make!(
        eventFor({ ...call, form: { revision, kind: 'whole', paper: '', margin: '', overlap: '' } })
      )
    );
    expect(made).toMatchObject({ kind: 'redirect', status: 303 });
    const jobsAsked = await guides.list(cast.here.cutter.scope, lay);
    expect(jobsAsked.map(({ choice }) => choice)).toEqual([{ kind: 'whole', margin: 10, overlap: 15 }]);
    await runner.drain();
  });
});

describe('a scanned ticket', () => {
  const scanned = async (code: string, locals = signedOut) =>
    (await scan(eventFor({ locals, params: { hash: code } }))) as {
      verdict: string;
      paper: { layName: string } | null;
    };

  it('tells anybody whether the paper is current, and only its own people which lay it is', async () => {
    const { lay, revision, hash } = await keptRevision(cast.here, { released: true });
    const code = (await guides.inputOf(cast.here.owner.scope, revision)).scanAddress.split('/').at(-1)!;
    expect(hash.startsWith(code)).toBe(true);
    const outside = await scanned(code);
    expect(outside.verdict).toBe('current');
    expect(JSON.stringify(outside)).not.toMatch(/Main cloth|Linden|Lovejoy|first/);
    expect((await scanned(code, cast.elsewhere.owner.locals)).paper).toBeNull();
    expect((await scanned(code, cast.here.cutter.locals)).paper).toMatchObject({ layName: 'Main cloth' });

    const set = (change: Record<string, unknown>) => cast.db('lays').where({ id: lay }).update(change);
    await set({ state: 'cut' });
    expect((await scanned(code)).verdict).toBe('cut');
    await set({ state: 'open', released_revision_id: null });
    expect((await scanned(code)).verdict).toBe('withdrawn');
    const other = await keptRevision(cast.here, { released: true });
    await set({ state: 'released', released_revision_id: other.revision });
    expect((await scanned(code)).verdict).toBe('superseded');
  });

  it('knows paper that was never released, and codes that it does not know', async () => {
    const { hash } = await keptRevision(cast.here);
    expect((await scanned(hash)).verdict).toBe('not-released');
    expect((await scanned('0'.repeat(20))).verdict).toBe('unknown');
    expect((await scanned(hash.slice(0, 12))).verdict).toBe('unknown');
    expect((await scanned('%'.repeat(20))).verdict).toBe('unknown');
  });
});
