import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import { LIMITS } from '$lib/interchange/limits';
import { panelFileType } from '$lib/interchange/read-file';
import { database } from './database';
import { newId } from './ids';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Uploaded files, as they came. What a file is goes by what it holds, never by its name; it is given back only as a
 * download, so that no uploaded markup is ever shown as markup.
 */

const TYPES = { svg: 'image/svg+xml', dxf: 'image/vnd.dxf' } as const;

export interface FileFacts {
  readonly id: string;
  readonly name: string;
  readonly type: string;
  readonly size: number;
  /** SHA-256 of the bytes, hex. */
  readonly hash: string;
}

/** A file name without its folders and control characters, at most 120 characters. */
export function plainName(name: string): string {
  const last = name.split(/[\\/]/).at(-1) ?? '';
  // eslint-disable-next-line no-control-regex
  const plain = last.replace(/[\u0000-\u001f\u007f\u202a-\u202e\u2066-\u2069]+/g, '').trim();
  return plain === '' || plain === '.' || plain === '..' ? 'drawing' : plain.slice(0, 120);
}

/**
 * Keeps a drawing (SVG or DXF by its content, at most 5 MB) and gives its facts. The same bytes under the same name
 * are kept once per studio.
 */
export async function createDrawing(
  scope: Scope,
  upload: { readonly name: string; readonly bytes: Uint8Array },
  { now = Date.now(), db = database() }: { now?: number; db?: Knex } = {}
): Promise<FileFacts> {
  const name = plainName(upload.name);
  const size = upload.bytes.length;
  if (size === 0) throw new Problem(400, 'empty-file', 'Empty file', `${name} is empty.`);
  if (size > LIMITS.bytes)
    throw new Problem(
      413,
      'file-too-large',
      'File too large',
      `${name} has ${(size / 1024 / 1024).toFixed(1)} MB; ${LIMITS.bytes / 1024 / 1024} MB are allowed.`
    );
  const kind = panelFileType(upload.bytes);
  if (!kind)
    throw new Problem(
      415,
      'not-a-drawing',
      'Neither SVG nor DXF',
      `${name} is neither an SVG nor a DXF drawing, whatever its name says.`
    );
  const hash = createHash('sha256').update(upload.bytes).digest('hex');
  const type = TYPES[kind];
  const known = await db('files')
    .where({ studio_id: scope.studio, hash, name })
    .first<{ id: string } | undefined>('id');
  if (known) return { id: known.id, name, type, size, hash };
  const id = newId(now);
  await db('files').insert({
    id,
    studio_id: scope.studio,
    hash,
    name,
    type,
    size,
    bytes: Buffer.from(upload.bytes),
    created_at: now
  });
  return { id, name, type, size, hash };
}

/** A file with its bytes; 404 for what is not this studio's. */
export async function read(scope: Scope, id: string): Promise<FileFacts & { readonly bytes: Buffer }> {
  const row = await database()('files')
    .where({ studio_id: scope.studio, id })
    .first<(FileFacts & { bytes: Buffer }) | undefined>('id', 'name', 'type', 'size', 'hash', 'bytes');
  if (!row) throw notFound('file');
  return row;
}

/** A file as a download: never shown in the page, never guessed at, nothing in it may run. */
export function download(file: {
  readonly name: string;
  readonly type: string;
  readonly bytes: Buffer;
}): Response {
  const ascii = file.name.replace(/[^\x20-\x7e]|["\\%]/g, '_');
  return new Response(new Uint8Array(file.bytes), {
    headers: {
      'content-type': file.type,
      'content-length': String(file.bytes.length),
      'content-disposition': `attachment; filename="${ascii}"; filename*=UTF-8''${encodeURIComponent(file.name).replace(/['()*]/g, (sign) => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`)}`,
      'x-content-type-options': 'nosniff',
      'content-security-policy': "default-src 'none'; sandbox",
      'cache-control': 'private, no-store'
    }
  });
}
