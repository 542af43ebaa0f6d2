import type { Knex } from 'knex';
import * as accounts from './accounts';
import * as audit from './audit';
import { database } from './database';
import * as mails from './door-mails';
import { newId } from './ids';
import { linkDead } from './one-time-link';
import * as outbox from './outbox';
import { hashPassword } from './passwords';
import type { Role } from './permissions';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';
import * as studios from './studios';
import { hashToken, newToken } from './tokens';

/*
 * Inviting people to a studio. The link proves the address; whoever has an account with it must be signed in to it.
 */

const validFor = 7 * 86_400_000;

export interface Invitation {
  readonly id: string;
  readonly email: string;
  readonly role: Role;
  readonly createdAt: number;
  readonly expiresAt: number;
}

/** Invitations that nobody has accepted or taken back, the newest first; the expired ones too. */
export async function list(scope: Scope): Promise<Invitation[]> {
  return database()('invitations')
    .where({ studio_id: scope.studio })
    .whereNull('used_at')
    .whereNull('revoked_at')
    .orderBy('created_at', 'desc')
    .select<Invitation[]>({
      id: 'id',
      email: 'email',
      role: 'role',
      createdAt: 'created_at',
      expiresAt: 'expires_at'
    });
}

/** Invites an address; an earlier invitation to it is taken back. Says nothing about accounts elsewhere. */
export async function create(
  scope: Scope,
  { email, role }: { email: string; role: Role },
  now = Date.now()
): Promise<string> {
  const id = newId(now);
  const { token, hash } = newToken();
  const studio = await studios.read(scope);
  const inviter = await accounts.read(scope.user);
  await database().transaction(async (trx) => {
    if (await isMember(scope.studio, email, trx))
      throw new Problem(
        409,
        'member-already',
        'A member already',
        'This person works in the studio already.'
      );
    await trx('invitations')
      .where({ studio_id: scope.studio, email })
      .whereNull('used_at')
      .whereNull('revoked_at')
      .update({ revoked_at: now });
    await trx('invitations').insert({
      id,
      studio_id: scope.studio,
      token_hash: hash,
      email,
      role,
      invited_by: scope.user,
      expires_at: now + validFor,
      created_at: now
    });
    await outbox.queue(
      mails.invitationLink(id, scope.studio, email, inviter.name, studio.name, role, token),
      trx
    );
    await audit.recordBy(scope, 'person: invited', email, { role }, trx);
  });
  return id;
}

/** Takes an invitation back: its link stops working. */
export async function revoke(scope: Scope, id: string, now = Date.now()): Promise<void> {
  await database().transaction(async (trx) => {
    const taken = await trx('invitations')
      .where({ studio_id: scope.studio, id })
      .whereNull('used_at')
      .whereNull('revoked_at')
      .update({ revoked_at: now });
    if (taken === 0) throw notFound('invitation');
    await audit.recordBy(scope, 'invitation: taken back', id, {}, trx);
  });
}

export interface OpenInvitation {
  readonly id: string;
  readonly studioId: string;
  readonly studioName: string;
  readonly email: string;
  readonly role: Role;
  /** Known only to whoever holds the link, who has proven the address. */
  readonly hasAccount: boolean;
}

/** What a link invites to. @throws Problem 410 */
export async function read(token: string, now = Date.now(), db: Knex = database()): Promise<OpenInvitation> {
  const row = await db('invitations')
    .join('studios', 'studios.id', 'invitations.studio_id')
    .where({ token_hash: hashToken(token) })
    .whereNull('used_at')
    .whereNull('revoked_at')
    .where('expires_at', '>', now)
    .first<Omit<OpenInvitation, 'hasAccount'> | undefined>({
      id: 'invitations.id',
      studioId: 'studios.id',
      studioName: 'studios.name',
      email: 'invitations.email',
      role: 'invitations.role'
    });
  if (!row) throw linkDead();
  return { ...row, hasAccount: (await accounts.findByEmail(row.email, db)) !== null };
}

/** Accepts for an address without an account: makes one. */
export async function acceptAsNew(
  token: string,
  { name, password }: { name: string; password: string },
  now = Date.now()
): Promise<{ userId: string; studioId: string }> {
  await read(token, now);
  const passwordHash = await hashPassword(password);
  return database().transaction(async (trx) => {
    const invitation = await read(token, now, trx);
    const userId = await accounts.create({ email: invitation.email, name, passwordHash }, trx, now);
    await use(invitation, userId, now, trx);
    return { userId, studioId: invitation.studioId };
  });
}

/** Accepts for an account; the person must be signed in to the one that the invitation was sent to. */
export async function acceptAs(
  token: string,
  user: { id: string; email: string },
  now = Date.now()
): Promise<{ studioId: string }> {
  return database().transaction(async (trx) => {
    const invitation = await read(token, now, trx);
    if (invitation.email !== user.email)
      throw new Problem(
        403,
        'other-address',
        'For another address',
        `This invitation was sent to ${invitation.email}. Sign in with that account to accept it.`
      );
    await use(invitation, user.id, now, trx);
    return { studioId: invitation.studioId };
  });
}

async function use(invitation: OpenInvitation, userId: string, now: number, trx: Knex): Promise<void> {
  await trx('invitations').where({ id: invitation.id }).update({ used_at: now });
  // Who became a member in the meantime keeps the role they have now.
  if (await isMember(invitation.studioId, invitation.email, trx)) return;
  await studios.join(invitation.studioId, userId, invitation.role, trx, now);
  await audit.record(
    {
      studioId: invitation.studioId,
      userId,
      action: 'person: joined',
      subject: userId,
      detail: { role: invitation.role }
    },
    trx
  );
}

async function isMember(studioId: string, email: string, db: Knex): Promise<boolean> {
  const row = await db('memberships')
    .join('users', 'users.id', 'memberships.user_id')
    .where({ 'memberships.studio_id': studioId, 'users.email': email })
    .whereNull('memberships.disabled_at')
    .first('memberships.id');
  return row !== undefined;
}
