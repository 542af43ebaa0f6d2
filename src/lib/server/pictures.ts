import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import sharp from 'sharp';
import { database } from './database';
import { plainName, type FileFacts } from './files';
import { newId } from './ids';
import { Problem } from './problem';
import type { Scope } from './scope';

/*
 * Photos. What is uploaded is read, turned upright, made smaller and written anew, so that nothing that came with it (place,
 * camera, markup) is kept or served.
 */

const MOST_BYTES = 12 * 1024 * 1024;
const MOST_PIXELS = 60_000_000;
/** The longer side of a kept photo, pixels. */
const SIDE = 1600;
const readable = ['jpeg', 'png', 'webp'];

/**
 * Keeps a photo (JPEG, PNG or WebP by its content, at most 12 MB) as a WebP among the studio's files.
 * @throws Problem 413 for what is too large, 415 for what is no photo
 */
export async function createPicture(
  scope: Scope,
  upload: { readonly name: string; readonly bytes: Uint8Array },
  { now = Date.now(), db = database() }: { now?: number; db?: Knex } = {}
): Promise<FileFacts> {
  const name = `${plainName(upload.name).replace(/\.[^.]*$/, '')}.webp`;
  if (upload.bytes.length > MOST_BYTES)
    throw new Problem(
      413,
      'file-too-large',
      'Photo too large',
      `This photo has ${(upload.bytes.length / 1024 / 1024).toFixed(1)} MB; ${MOST_BYTES / 1024 / 1024} MB are allowed.`
    );
  let bytes: Buffer;
  try {
    const picture = sharp(upload.bytes, { limitInputPixels: MOST_PIXELS });
    const { format } = await picture.metadata();
    if (!readable.includes(format ?? '')) throw new Error(`A photo of kind ${format}`);
    bytes = await picture
      .rotate()
      .resize({ width: SIDE, height: SIDE, fit: 'inside', withoutEnlargement: true })
      .webp({ quality: 80 })
      .toBuffer();
  } catch {
    throw new Problem(
      415,
      'not-a-photo',
      'Not a photo',
      `${plainName(upload.name)} is no JPEG, PNG or WebP photo that can be read, whatever its name says.`
    );
  }
  const id = newId(now);
  const hash = createHash('sha256').update(bytes).digest('hex');
  const facts: FileFacts = { id, name, type: 'image/webp', size: bytes.length, hash };
  await db('files').insert({ ...facts, studio_id: scope.studio, bytes, created_at: now });
  return facts;
}

/** A kept photo as the page shows it. */
export function pictureResponse(file: { readonly type: string; readonly bytes: Buffer }): Response {
  return new Response(new Uint8Array(file.bytes), {
    headers: {
      'content-type': file.type,
      'content-length': String(file.bytes.length),
      'x-content-type-options': 'nosniff',
      'content-security-policy': "default-src 'none'; sandbox",
      'cache-control': 'private, max-age=3600'
    }
  });
}
