import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { newId } from '$lib/server/ids';
import { integrityFaults, openDatabase } from '$lib/server/database';
import * as sessions from '$lib/server/sessions';
import { makeCast, password, sessionOf, type Cast } from './cast';
import { isBuilt, postForm, startBuild, type RealServer } from './real-server';

if (!isBuilt) console.warn('No build: the tests of the real server are skipped (npm run build first).');

let folder: string;
let file: string;
let cast: Cast;
let server: RealServer | undefined;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'server-'));
  file = path.join(folder, 'db.sqlite');
  cast = await makeCast(file);
});
afterEach(async () => {
  await server?.kill();
  server = undefined;
  await cast.close();
  rmSync(folder, { recursive: true });
});

/** The cookie header of a session made here; the server under test has plain http and so the plain name. */
async function cookieOf(person: Cast['here']['owner']): Promise<string> {
  const jar = await sessionOf(person);
  return `warpwise=${jar.get(sessions.cookieName)}`;
}

describe.skipIf(!isBuilt)('the built server', () => {
  it('answers with its safeguards on every kind of answer, and a request id', async () => {
    server = await startBuild(file);
    for (const where of ['/sign-in', '/api/jobs/x', '/health', '/nowhere']) {
      const { headers } = await fetch(server.address + where);
      expect(headers.get('x-content-type-options'), where).toBe('nosniff');
      expect(headers.get('referrer-policy'), where).toBe('same-origin');
      expect(headers.get('permissions-policy'), where).toContain('camera=()');
      expect(headers.get('content-security-policy'), where).toContain("frame-ancestors 'none'");
      expect(headers.get('x-request-id'), where).toMatch(/^[\da-f-]{36}$/);
      expect(headers.get('strict-transport-security'), where).toBeNull();
    }
    const page = (await fetch(`${server.address}/sign-in`)).headers.get('content-security-policy')!;
    expect(page).toContain("object-src 'none'");
    expect(page).toContain("base-uri 'none'");
    expect(page).not.toMatch(/script-src[^;]*unsafe/);
  });

  it('behind https: strict transport, and a cookie that is Secure, HttpOnly, Lax and bound to the host', async () => {
    const origin = 'https://warpwise.example';
    server = await startBuild(file, { ORIGIN: origin });
    const answer = await postForm(server, '/sign-in', { email: cast.here.owner.email, password }, { origin });
    expect(answer.status).toBe(303);
    expect(answer.headers.get('strict-transport-security')).toMatch(/max-age=31536000; includeSubDomains/);
    const cookie = answer.headers.get('set-cookie')!;
    expect(cookie).toMatch(/^__Host-warpwise=[\w-]{43};/);
    for (const part of ['HttpOnly', 'Secure', 'SameSite=Lax', 'Path=/'])
      expect(cookie.toLowerCase()).toContain(part.toLowerCase());
  });

  it('refuses a form that another site posts', async () => {
    server = await startBuild(file);
    const form = { email: cast.here.owner.email, password };
    const answer = await postForm(server, '/sign-in', form, { origin: 'https://elsewhere.example' });
    expect(answer.status).toBe(403);
    expect(answer.headers.get('set-cookie')).toBeNull();
  });

  it('never writes a password, a token or a one-time path into its log', async () => {
    server = await startBuild(file);
    const secret = 'S'.repeat(43);
    await postForm(server, '/sign-in', { email: cast.here.owner.email, password: 'wrong but secret words' });
    const right = await postForm(server, '/sign-in', { email: cast.here.owner.email, password });
    const token = /warpwise=([\w-]{43})/.exec(right.headers.get('set-cookie')!)![1]!;
    expect((await fetch(`${server.address}/reset/${secret}`)).status).toBe(410);
    await expect.poll(() => server!.log()).toContain('/reset/[token]');
    for (const word of [secret, token, 'wrong but secret words', password])
      expect(server.log()).not.toContain(word);
  });

  it('copies a database of an earlier form before it brings it up to date', async () => {
    await cast.db.schema.dropTable('address_changes');
    await cast.db('knex_migrations').where({ name: '0002_address_changes.ts' }).delete();
    const copies = path.join(folder, 'copies');
    server = await startBuild(file, { WARPWISE_BACKUPS: copies });
    expect(await cast.db.schema.hasTable('address_changes')).toBe(true);
    const [copy] = readdirSync(copies);
    const before = openDatabase(path.join(copies, copy!));
    expect(await before.schema.hasTable('address_changes')).toBe(false);
    expect(await before('users')).toHaveLength(6);
    await before.destroy();
  });

  it('reads an upload in a worker thread of the build, and makes a page of it', async () => {
    const cookie = await cookieOf(cast.here.patternMaker);
    server = await startBuild(file);
    const form = new FormData();
    form.set('files', new File([readFileSync('static/sample.svg')], 'sample.svg'));
    const answer = await fetch(`${server.address}/styles/new`, {
      method: 'POST',
      redirect: 'manual',
      headers: { origin: server.address, accept: 'text/html', cookie },
      body: form
    });
    expect(answer.status).toBe(303);
    const page = await fetch(new URL(answer.headers.get('location')!, server.address), {
      headers: { cookie }
    });
    expect(page.status).toBe(200);
    expect(await page.text()).toContain('sample.svg');
    expect(await cast.db('imports')).toMatchObject([{ state: 'read' }]);
  });

  it('goes down at SIGTERM although an event stream is open, and ends by itself', async () => {
    const job = newId();
    const now = Date.now();
    await cast.db('jobs').insert({
      id: job,
      studio_id: cast.here.id,
      kind: 'guide',
      state: 'waiting',
      input: '{}',
      not_before: now + 3_600_000,
      created_by: cast.here.owner.id,
      created_at: now,
      updated_at: now
    });
    const cookie = await cookieOf(cast.here.owner);
    server = await startBuild(file);
    const stream = await fetch(`${server.address}/api/jobs/${job}/events`, { headers: { cookie } });
    expect(stream.status).toBe(200);
    const whole = stream.text();
    await new Promise((resolve) => setTimeout(resolve, 200));
    server.process.kill('SIGTERM');
    expect(await server.ended).toBe(0);
    expect(await whole).toContain('"state":"waiting"');
    expect(server.log()).toContain('"msg":"shut down"');
  });

  it('killed in the middle of writing leaves a sound database, each change whole or not there', async () => {
    const cookie = await cookieOf(cast.here.owner);
    server = await startBuild(file);
    const target = cast.here.cutter.id;
    const roles = ['patternMaker', 'cutter'];
    let sent = 0;
    const writing = (async () => {
      for (;;) {
        const role = roles[sent % 2]!;
        const answer = await postForm(server!, '/people?/changeRole', { userId: target, role }, { cookie });
        if (answer.status !== 303) throw new Error(`answered ${answer.status}`);
        sent += 1;
      }
    })().catch((error: unknown) => error);
    await expect.poll(() => sent, { timeout: 20_000 }).toBeGreaterThan(20);
    await server.kill();
    await writing;
    const db = openDatabase(file);
    expect(await integrityFaults(db)).toEqual([]);
    const entries = await db('audit_entries').where({ action: 'person: role changed' }).orderBy('id');
    const { role } = await db('memberships').where({ studio_id: cast.here.id, user_id: target }).first();
    expect(entries.length).toBeGreaterThanOrEqual(sent);
    expect(role).toBe(entries.length % 2 === 1 ? 'patternMaker' : 'cutter');
    await db.destroy();
  });
});
