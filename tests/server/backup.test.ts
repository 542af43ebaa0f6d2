import { execFileSync } from 'node:child_process';
import {
  mkdtempSync,
  openSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
  writeSync,
  closeSync
} from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import * as audit from '$lib/server/audit';
import { backUp, restore } from '$lib/server/backup';
import { integrityFaults, openDatabase } from '$lib/server/database';
import { makeCast, type Cast } from './cast';

let folder: string;
let file: string;
let cast: Cast;
beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'backup-'));
  file = path.join(folder, 'live.sqlite');
  cast = await makeCast(file);
});
afterEach(async () => {
  await cast.close();
  rmSync(folder, { recursive: true });
});

const copies = () => path.join(folder, 'copies');
async function rowsIn(copy: string, table: string): Promise<number> {
  const db = openDatabase(copy);
  try {
    expect(await integrityFaults(db)).toEqual([]);
    return (await db(table)).length;
  } finally {
    await db.destroy();
  }
}

/** Overwrites the middle of a file. */
function damage(copy: string) {
  const size = readFileSync(copy).length;
  const handle = openSync(copy, 'r+');
  for (let at = 4096; at < size; at += 4096) writeSync(handle, Buffer.alloc(600, 0xa5), 0, 600, at);
  closeSync(handle);
}

describe('a backup', () => {
  it('is whole while somebody is writing, and one file', async () => {
    let writing = true;
    const writer = (async () => {
      while (writing)
        await cast.db.transaction(async (trx) => {
          for (let i = 0; i < 5; i += 1)
            await audit.recordBy(cast.here.owner.scope, 'test: entry', String(i), {}, trx);
        });
    })();
    // As `npm run backup` does it: over a connection of its own.
    const own = openDatabase(file);
    const made = [];
    for (let i = 0; i < 5; i += 1) made.push(await backUp(own, copies(), new Date(2026, 0, 1, 0, 0, i)));
    writing = false;
    await writer;
    await own.destroy();
    expect(readdirSync(copies()).sort()).toEqual(made.map((copy) => path.basename(copy)).sort());
    for (const copy of made) expect((await rowsIn(copy, 'audit_entries')) % 5).toBe(0);
  });

  it('leaves nothing when it fails', async () => {
    const broken = { raw: () => Promise.reject(new Error('disk full')) } as never;
    await expect(backUp(broken, copies())).rejects.toThrow('disk full');
    expect(readdirSync(copies())).toEqual([]);
  });

  it('runs as a command beside the open database', () => {
    const command = path.join(process.env.WARPWISE_WORKERS!, 'backup.js');
    const said = execFileSync(process.execPath, [command, copies()], {
      env: { PATH: process.env.PATH, WARPWISE_DATABASE: file, WARPWISE_LOG_LEVEL: 'silent' },
      encoding: 'utf8'
    });
    expect(said).toContain('found sound');
    expect(readdirSync(copies())).toHaveLength(1);
  });
});

describe('a restore', () => {
  it('brings back what the copy had, and keeps the former database beside it', async () => {
    const copy = await backUp(cast.db, copies());
    await cast.db('memberships').delete();
    await cast.close();
    const kept = await restore(copy, file);
    expect(await rowsIn(file, 'memberships')).toBe(6);
    expect(await rowsIn(kept!, 'memberships')).toBe(0);
  });

  it('makes a database where there was none', async () => {
    const copy = await backUp(cast.db, copies());
    const elsewhere = path.join(folder, 'new', 'place.sqlite');
    expect(await restore(copy, elsewhere)).toBeNull();
    expect(await rowsIn(elsewhere, 'users')).toBe(6);
  });

  it.each(['damaged', 'cut short', 'empty', 'no database', 'another program’s'])(
    'of a copy that is %s changes nothing',
    async (how) => {
      const copy = await backUp(cast.db, copies());
      if (how === 'damaged') damage(copy);
      if (how === 'cut short') writeFileSync(copy, readFileSync(copy).subarray(0, 9000));
      if (how === 'empty') writeFileSync(copy, '');
      if (how === 'no database') writeFileSync(copy, 'just some text that is no database at all'.repeat(300));
      if (how === 'another program’s') {
        rmSync(copy);
        const other = openDatabase(copy);
        await other.schema.createTable('recipes', (t) => t.text('name'));
        await other.destroy();
      }
      await expect(restore(copy, file)).rejects.toThrow();
      expect(readdirSync(folder).filter((name) => /incoming|before/.test(name))).toEqual([]);
      expect(await rowsIn(file, 'users')).toBe(6);
    }
  );
});
