import { laidWidth, type Zone } from '$lib/cloth/strip';
import { choiceOf, spreadOf, spreadWords } from '$lib/cloth/spread';
import { check } from '$lib/lay/check';
import { prepare, placePrepared, outlineOf } from '$lib/geometry/prepared';
import type { Box } from '$lib/geometry/point';
import { emptyRectangles, SMALLEST_REMNANT } from '$lib/lay/empty-rectangles';
import { panelOfPlacement } from '$lib/lay/needs';
import { laidShape } from '$lib/lay/on-fold';
import { nameOf } from '$lib/lay/wording';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import type { Millimetres } from '$lib/units/measure';
import * as audit from './audit';
import * as clothLengths from './cloth-lengths';
import { database } from './database';
import { newId } from './ids';
import * as layLengths from './lay-lengths';
import * as layRevisions from './lay-revisions';
import { isReplaced, replacedAmong } from './replaced-panels';
import { invalid, notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * The cutting room: released lays in order of need, what is ticked off while cutting, what was really used. A cut lay never changes.
 */

export interface Queued {
  readonly lay: string;
  readonly revision: string;
  readonly name: string;
  readonly orderNumber: number;
  readonly dueDate: string | null;
  readonly cloth: { readonly name: string; readonly colour: string };
  readonly pieces: number;
  readonly ticked: number;
  /** Its panels were replaced since: not to be cut until the pattern maker decided. */
  readonly stop: boolean;
}

/** Released lays that are not cut, what is due first on top. */
export async function queue(scope: Scope): Promise<Queued[]> {
  const db = database();
  const rows = await db('lays')
    .join('orders', 'orders.id', 'lays.order_id')
    .join('cloths', 'cloths.id', 'lays.cloth_id')
    .where({ 'lays.studio_id': scope.studio, 'lays.state': 'released' })
    .whereNotNull('lays.released_revision_id')
    .orderByRaw('orders.due_date is null')
    .orderBy(['orders.due_date', 'orders.number', 'lays.id'])
    .limit(200)
    .select<
      {
        lay: string;
        revision: string;
        name: string;
        orderNumber: number;
        dueDate: string | null;
        cloth: string;
        colour: string;
        document: string;
      }[]
    >({
      lay: 'lays.id',
      revision: 'lays.released_revision_id',
      name: 'lays.name',
      orderNumber: 'orders.number',
      dueDate: 'orders.due_date',
      cloth: 'cloths.name',
      colour: 'cloths.colour',
      document: 'lays.document'
    });
  const ticks = await db('cut_ticks')
    .where({ studio_id: scope.studio })
    .whereIn(
      'revision_id',
      rows.map(({ revision }) => revision)
    )
    .groupBy('revision_id')
    .select<{ revision_id: string; n: number }[]>('revision_id', db.raw('count(*) as n'));
  const replaced = await replacedAmong(rows.map(({ lay }) => lay));
  return rows.map(({ document, cloth, colour, ...row }) => ({
    ...row,
    cloth: { name: cloth, colour },
    pieces: (JSON.parse(document) as { placements: unknown[] }).placements.length,
    ticked: Number(ticks.find(({ revision_id }) => revision_id === row.revision)?.n ?? 0),
    stop: replaced.has(row.lay)
  }));
}

export interface CuttingTicket {
  readonly lay: string;
  readonly state: 'released' | 'cut';
  readonly revision: { readonly id: string; readonly number: number; readonly hash: string };
  readonly orderNumber: number;
  readonly cloth: { readonly name: string; readonly colour: string };
  /** On which roll or remnant, and where it is kept; null while none is named. */
  readonly length: {
    readonly id: string;
    readonly name: string;
    readonly place: string;
    readonly version: number;
    readonly length: Millimetres;
  } | null;
  readonly spread: string;
  readonly width: Millimetres;
  readonly lengthUsed: Millimetres;
  readonly ends: { readonly start: Millimetres; readonly end: Millimetres };
  readonly nap: 'none' | 'oneWay' | 'garmentWay';
  readonly repeat: boolean;
  readonly flaws: readonly { readonly x: Millimetres; readonly y: Millimetres; readonly note: string }[];
  readonly pieces: readonly {
    readonly id: string;
    readonly name: string;
    readonly box: Box;
    readonly ticked: boolean;
  }[];
  /** What is left that would make a remnant, on one layer. */
  readonly left: readonly Box[];
  readonly stop: boolean;
}

/** What the cutter needs at the table, from the kept bytes of the released revision. */
export async function ticket(scope: Scope, layId: string): Promise<CuttingTicket> {
  const row = await rowOf(scope, layId);
  const { revision, document, panels, verdict } = await layRevisions.readById(scope, row.revision);
  const ticks = new Set(
    (
      await database()('cut_ticks')
        .where({ studio_id: scope.studio, revision_id: row.revision })
        .select<{ placement: string }[]>('placement')
    ).map(({ placement }) => placement)
  );
  const outlineOfPiece = (one: LayPlacement) => {
    const panel = panelOfPlacement(document, panels, one);
    return panel ? placePrepared(prepare(laidShape(panel, one, document.strip).cut), one) : null;
  };
  const laid = document.placements.flatMap((one) => {
    const shape = outlineOfPiece(one);
    return shape ? [{ one, shape }] : [];
  });
  const length = await layLengths.lengthOf(scope, layId);
  const { strip } = document;
  return {
    lay: layId,
    state: row.state,
    revision: { id: revision.id, number: revision.number, hash: revision.hash },
    orderNumber: row.orderNumber,
    cloth: { name: row.cloth, colour: row.colour },
    length: length && {
      id: length.id,
      name: length.name,
      place: length.place,
      version: length.version,
      length: length.length
    },
    spread: spreadWords(strip),
    width: laidWidth(strip),
    lengthUsed: verdict.readings.lengthUsed,
    ends: strip.endAllowance,
    nap: strip.nap,
    repeat: strip.repeat.along !== null || strip.repeat.across !== null,
    flaws: strip.flaws.map(({ x, y, note }) => ({ x, y, note })),
    pieces: laid
      .map(({ one, shape }) => ({
        id: one.id,
        name: nameOf(document, panels, one),
        box: shape.box,
        ticked: ticks.has(one.id)
      }))
      .sort((a, b) => a.box.minX - b.box.minX || a.box.minY - b.box.minY),
    left:
      row.state === 'released'
        ? emptyRectangles(
            laid.map(({ shape }) => outlineOf(shape)),
            verdict.readings.lengthUsed,
            laidWidth(strip),
            { least: SMALLEST_REMNANT, most: 4 }
          )
        : [],
    stop: await isReplaced(scope, layId)
  };
}

interface Row {
  state: 'released' | 'cut';
  revision: string;
  orderNumber: number;
  cloth: string;
  colour: string;
}

async function rowOf(scope: Scope, layId: string): Promise<Row> {
  const row = await database()('lays')
    .join('orders', 'orders.id', 'lays.order_id')
    .join('cloths', 'cloths.id', 'lays.cloth_id')
    .where({ 'lays.studio_id': scope.studio, 'lays.id': layId })
    .whereIn('lays.state', ['released', 'cut'])
    .first<Row | undefined>({
      state: 'lays.state',
      revision: 'lays.released_revision_id',
      orderNumber: 'orders.number',
      cloth: 'cloths.name',
      colour: 'cloths.colour'
    });
  if (!row?.revision) throw notFound('released lay');
  return row;
}

/** Ticks pieces off, or takes ticks back; the same tick twice is one, so that a lost connection can send all again. */
export async function tick(
  scope: Scope,
  layId: string,
  ticks: readonly { readonly placement: string; readonly cut: boolean }[],
  now = Date.now()
): Promise<void> {
  const row = await rowOf(scope, layId);
  if (row.state === 'cut') throw new Problem(409, 'lay-cut', 'This lay is cut', 'Its record is closed.');
  const { document } = await layRevisions.readById(scope, row.revision);
  const known = new Set(document.placements.map(({ id }) => id));
  if (ticks.some(({ placement }) => !known.has(placement))) throw notFound('piece of this lay');
  await database().transaction(async (trx) => {
    for (const { placement, cut } of ticks)
      if (cut)
        await trx('cut_ticks')
          .insert({ studio_id: scope.studio, revision_id: row.revision, placement, by: scope.user, at: now })
          .onConflict()
          .ignore();
      else
        await trx('cut_ticks')
          .where({ studio_id: scope.studio, revision_id: row.revision, placement })
          .delete();
  });
}

/**
 * What stops the lay on the cloth as it was measured: the same spread laid anew with the width between the selvedges (folded cloth
 * loses half of what is missing), and with the length less the end allowances. Empty only if the whole check has nothing against it.
 * @throws Problem 400 for a width on which the cloth can't be spread so at all.
 */
export async function unfit(
  scope: Scope,
  layId: string,
  met: { readonly width: Millimetres; readonly length: Millimetres | null }
): Promise<string[]> {
  const row = await rowOf(scope, layId);
  const { document, panels } = await layRevisions.readById(scope, row.revision);
  const { strip } = document;
  const width = {
    usableWidth: met.width,
    fullWidth: met.width + Math.max(0, strip.fullWidth - strip.usableWidth)
  };
  const ends = strip.endAllowance.start + strip.endAllowance.end;
  let spread: Zone[];
  try {
    spread = spreadOf(width, choiceOf(strip));
  } catch (fault) {
    if (fault instanceof RangeError)
      throw invalid({ width: `The cloth can't be spread so: ${fault.message}` });
    throw fault;
  }
  if (met.length !== null && met.length <= ends)
    throw invalid({ length: 'Nothing is left of it between the end allowances.' });
  const length = met.length === null ? strip.length : met.length - ends;
  const real: LayDocument = { ...document, strip: { ...strip, ...width, spread, length } };
  return check(real, panels)
    .findings.filter(({ severity }) => severity === 'stops')
    .map(({ message }) => message);
}

export interface CutInput {
  /** Cloth really used, ends included. */
  readonly lengthUsed: Millimetres;
  readonly widthMet: Millimetres | null;
  readonly flaws: string;
  readonly recuts: string;
  /** Remnants to keep, of the roll that was cut from. */
  readonly offcuts: readonly {
    readonly length: Millimetres;
    readonly width: Millimetres;
    readonly place: string;
  }[];
}

export interface CutRecord extends Omit<CutInput, 'offcuts'> {
  readonly by: string;
  readonly at: number;
}

/**
 * Records the cut and closes the lay. Of the roll or remnant it was cut from, what was used is taken off. @throws Problem 409 for a lay that was
 * cut meanwhile, or whose panels were replaced.
 */
export async function record(scope: Scope, layId: string, cut: CutInput, now = Date.now()): Promise<void> {
  const row = await rowOf(scope, layId);
  if (row.state === 'cut')
    throw new Problem(409, 'lay-cut', 'This lay is cut already', 'Its record is below.');
  if (await isReplaced(scope, layId))
    throw new Problem(
      409,
      'panels-replaced',
      'STOP: the panels of this lay were replaced',
      'The pattern maker keeps them as they are, or the lay is reopened.'
    );
  const length = await layLengths.lengthOf(scope, layId);
  if (length && cut.lengthUsed > length.length + 0.5)
    throw new Problem(400, 'invalid-input', 'More used than there was', '', {
      fields: { lengthUsed: `${length.name} measured ${Math.round(length.length)} mm.` }
    });
  if (!length && cut.offcuts.length > 0)
    throw new Problem(400, 'invalid-input', 'Of no length', '', {
      fields: { offcuts: 'The lay names no roll or remnant: say first which one it was cut from.' }
    });
  await database().transaction(async (trx) => {
    const closed = await trx('lays')
      .where({ studio_id: scope.studio, id: layId, state: 'released', released_revision_id: row.revision })
      .update({ state: 'cut', updated_at: now });
    if (closed !== 1)
      throw new Problem(409, 'lay-changed', 'The lay was changed meanwhile', 'Look at it again.');
    await trx('cut_records').insert({
      id: newId(now),
      studio_id: scope.studio,
      lay_id: layId,
      revision_id: row.revision,
      length_used: cut.lengthUsed,
      width_met: cut.widthMet,
      flaws: cut.flaws,
      recuts: cut.recuts,
      by: scope.user,
      at: now
    });
    if (length) {
      for (const [k, { length: long, width, place }] of cut.offcuts.entries())
        await clothLengths.keepOffcut(
          scope,
          length.id,
          {
            name: `Remnant of ${length.name}, ${k + 1}`,
            length: long,
            usableWidth: width,
            typed: { length: `${long / 10} cm`, usableWidth: `${width / 10} cm` },
            outline: null,
            place,
            note: `Left of order ${row.orderNumber}`
          },
          now,
          trx
        );
      const left = Math.max(0, length.length - cut.lengthUsed);
      await clothLengths.use(
        scope,
        length.id,
        { version: length.version, left: left < 10 ? 0 : left },
        now,
        trx
      );
    }
    await audit.recordBy(scope, 'lay: cut', layId, { lengthUsed: cut.lengthUsed }, trx);
  });
}

/** What was recorded of a cut lay; null before. */
export async function recordOf(scope: Scope, layId: string): Promise<CutRecord | null> {
  const row = await database()('cut_records')
    .leftJoin('users', 'users.id', 'cut_records.by')
    .where({ 'cut_records.studio_id': scope.studio, lay_id: layId })
    .first<(CutRecord & { by: string | null }) | undefined>({
      lengthUsed: 'length_used',
      widthMet: 'width_met',
      flaws: 'flaws',
      recuts: 'recuts',
      by: 'users.name',
      at: 'at'
    });
  return row ? { ...row, by: row.by ?? 'the workroom' } : null;
}
