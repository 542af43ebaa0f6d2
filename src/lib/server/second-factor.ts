import { randomBytes } from 'node:crypto';
import { Secret, TOTP } from 'otpauth';
import * as accounts from './accounts';
import * as audit from './audit';
import { database } from './database';
import { Problem } from './problem';
import * as rateLimits from './rate-limits';
import { hashToken } from './tokens';

/*
 * One-time codes from a device as a second factor (RFC 6238: SHA-1, six digits, half a minute, one step of the clock either
 * way). Each code is taken once. Ten recovery codes replace a lost device, each once.
 */

const ISSUER = 'Warpwise';
const STEP = 30;
const CODES = 10;

const generatorOf = (secret: string, email: string): TOTP =>
  new TOTP({ issuer: ISSUER, label: email, algorithm: 'SHA1', digits: 6, period: STEP, secret });

interface Row {
  user_id: string;
  secret: string;
  confirmed_at: number | null;
  last_step: number;
}

const rowOf = (userId: string): Promise<Row | undefined> =>
  database()('second_factors').where({ user_id: userId }).first<Row | undefined>();

/** Whether the person has to give a code at sign-in. */
export async function has(userId: string): Promise<boolean> {
  return ((await rowOf(userId))?.confirmed_at ?? null) !== null;
}

/** How many recovery codes are left. */
export async function codesLeft(userId: string): Promise<number> {
  const row = await database()('recovery_codes')
    .where({ user_id: userId })
    .whereNull('used_at')
    .count({ n: '*' })
    .first<{ n: number } | undefined>();
  return row?.n ?? 0;
}

/** The secret to bring into the device; a new one while none is confirmed. @throws Problem 409 once one is. */
export async function begin(
  account: Pick<accounts.Account, 'id' | 'email'>,
  now = Date.now()
): Promise<{ secret: string; uri: string }> {
  const row = await rowOf(account.id);
  if (row && row.confirmed_at !== null)
    throw new Problem(
      409,
      'second-factor-on',
      'It is on already',
      'Turn it off first to use another device.'
    );
  const secret = row?.secret ?? new Secret({ size: 20 }).base32;
  if (!row)
    await database()('second_factors')
      .insert({ user_id: account.id, secret, created_at: now })
      .onConflict()
      .ignore();
  return { secret, uri: generatorOf(secret, account.email).toString() };
}

/** Turns it on once a first code is right. Gives the recovery codes, which are shown this once. */
export async function confirm(
  account: Pick<accounts.Account, 'id' | 'email'>,
  code: string,
  now = Date.now()
): Promise<string[]> {
  await limit(account.id);
  const row = await rowOf(account.id);
  if (!row || row.confirmed_at !== null) throw wrongCode();
  const step = stepOf(row, account.email, code, now);
  if (step === null) throw wrongCode();
  const codes = newCodes();
  await database().transaction(async (trx) => {
    await trx('second_factors')
      .where({ user_id: account.id })
      .whereNull('confirmed_at')
      .update({ confirmed_at: now, last_step: step });
    await trx('recovery_codes').where({ user_id: account.id }).delete();
    await trx('recovery_codes').insert(
      codes.map((one) => ({ code_hash: hashOf(account.id, one), user_id: account.id }))
    );
    await audit.record({ studioId: null, userId: account.id, action: 'second factor: turned on' }, trx);
  });
  await rateLimits.forgive('code: person', account.id);
  return codes;
}

/** Takes a code of the device, or a recovery code. @throws Problem 400 for a wrong or used one, 429 after too many. */
export async function take(
  account: Pick<accounts.Account, 'id' | 'email'>,
  code: string,
  now = Date.now()
): Promise<'device' | 'recovery'> {
  await limit(account.id);
  const row = await rowOf(account.id);
  if (!row || row.confirmed_at === null) throw wrongCode();
  const step = stepOf(row, account.email, code, now);
  // The condition makes of two requests with one code only the first right.
  const taken =
    step === null
      ? 0
      : await database()('second_factors')
          .where({ user_id: account.id })
          .where('last_step', '<', step)
          .update({ last_step: step });
  if (taken === 0) {
    const used = await database()('recovery_codes')
      .where({ code_hash: hashOf(account.id, code), user_id: account.id })
      .whereNull('used_at')
      .update({ used_at: now });
    if (used === 0) {
      await audit.record({ studioId: null, userId: account.id, action: 'second factor: wrong code' });
      throw wrongCode();
    }
    await audit.record({ studioId: null, userId: account.id, action: 'second factor: recovery code used' });
  }
  await rateLimits.forgive('code: person', account.id);
  return taken === 0 ? 'recovery' : 'device';
}

/** New recovery codes in place of the old ones. */
export async function renewCodes(userId: string): Promise<string[]> {
  const codes = newCodes();
  await database().transaction(async (trx) => {
    await trx('recovery_codes').where({ user_id: userId }).delete();
    await trx('recovery_codes').insert(
      codes.map((one) => ({ code_hash: hashOf(userId, one), user_id: userId }))
    );
    await audit.record({ studioId: null, userId, action: 'second factor: recovery codes renewed' }, trx);
  });
  return codes;
}

/** Turns it off and forgets secret and codes. */
export async function turnOff(userId: string): Promise<void> {
  await database().transaction(async (trx) => {
    await trx('second_factors').where({ user_id: userId }).delete();
    await trx('recovery_codes').where({ user_id: userId }).delete();
    await audit.record({ studioId: null, userId, action: 'second factor: turned off' }, trx);
  });
}

async function limit(userId: string): Promise<void> {
  const seconds = await rateLimits.attempt('code: person', userId);
  if (seconds > 0) throw new Problem(429, 'too-many', 'Too many attempts', rateLimits.waitWords(seconds));
}

const wrongCode = (): Problem =>
  new Problem(
    400,
    'wrong-code',
    'Wrong code',
    'This code is not right, or was used already. Wait for the next one.'
  );

/** The half minute that a code belongs to; null if to none near now. */
function stepOf(row: Row, email: string, code: string, now: number): number | null {
  const digits = code.replace(/\s/g, '');
  if (!/^\d{6}$/.test(digits)) return null;
  const off = generatorOf(row.secret, email).validate({ token: digits, timestamp: now, window: 1 });
  return off === null ? null : Math.floor(now / 1000 / STEP) + off;
}

/** Ten codes of 80 random bits: enough that a plain hash keeps them. */
function newCodes(): string[] {
  return Array.from({ length: CODES }, () =>
    randomBytes(10)
      .toString('hex')
      .replace(/(.{5})(?=.)/g, '$1-')
  );
}

const hashOf = (userId: string, code: string): string =>
  hashToken(`${userId} ${code.toLowerCase().replace(/[^0-9a-f]/g, '')}`);
