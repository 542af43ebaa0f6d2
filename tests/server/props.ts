import { readFileSync } from 'node:fs';
import { guideChoiceSchema } from '$lib/guide/guide-choice';
import sharp from 'sharp';
import type { LayDocument } from '$lib/lay/document';
import * as clients from '$lib/server/clients';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as clothWidths from '$lib/server/cloth-widths';
import * as clientLinks from '$lib/server/client-links';
import { database } from '$lib/server/database';
import * as draftRuns from '$lib/server/draft-runs';
import * as guides from '$lib/server/guides';
import { newId } from '$lib/server/ids';
import * as imports from '$lib/server/imports';
import * as jobs from '$lib/server/jobs';
import * as invitations from '$lib/server/invitations';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import * as layRelease from '$lib/server/lay-release';
import * as lays from '$lib/server/lays';
import { createPicture } from '$lib/server/pictures';
import * as orderQuestions from '$lib/server/order-questions';
import * as payments from '$lib/server/payments';
import { emptySheet } from '$lib/server/price-sheet';
import * as prices from '$lib/server/prices';
import * as quotes from '$lib/server/quotes';
import type { Scope } from '$lib/server/scope';
import * as sessions from '$lib/server/sessions';
import * as measurementSets from '$lib/server/measurement-sets';
import * as sizeCharts from '$lib/server/size-charts';
import * as settleRuns from '$lib/server/settle-runs';
import type { SettleBest } from '$lib/settle/run';
import { cookieJar, type House } from './cast';
import { good, makeOrder, type OrderRows } from './lay-orders';

/*
 * The props of a house: one of each thing that a route can name, made through the real modules, so that every handler
 * of the permission matrix has something of its own studio and something of another one to be called with.
 */

export interface Props {
  readonly studio: string;
  readonly cutter: string;
  readonly order: string;
  readonly item: string;
  readonly style: string;
  readonly styleVersion: string;
  readonly cloth: string;
  readonly lining: string;
  /** A roll of the main cloth with a photo and a flaw, and a width that the main cloth is sold in. */
  readonly clothLength: string;
  readonly clothLengthVersion: string;
  readonly clothFlaw: string;
  readonly clothWidth: string;
  /** An open lay on the main cloth with a good document, one revision kept. */
  readonly lay: string;
  readonly layVersion: number;
  readonly layDocument: LayDocument;
  readonly revision: string;
  readonly hash: string;
  /** A released lay on the lining. */
  readonly releasedLay: string;
  /** An upload that was read and waits to be confirmed. */
  readonly upload: string;
  readonly file: string;
  /** A guide that is made, and one that waits. */
  readonly guide: string;
  readonly waitingGuide: string;
  /** A settle run that was stopped, its best on offer. */
  readonly settled: string;
  /** A quote numbered 1 was sent; money in cash came in; the client asked through the link. */
  readonly payment: string;
  readonly clientLink: string;
  readonly question: string;
  readonly client: string;
  readonly measurementSet: string;
  readonly sizeChart: string;
  readonly draftRun: string;
  readonly invitation: string;
  /** The public id of a session of the owner. */
  readonly session: string;
}

/** What no cutter may ever be handed: prices, as numbers and as people read them, and what the supplier is told. */
export const price = { main: 76543210, lining: 87654321 };
export const secrets = [
  '76543210',
  '765432.10',
  '765,432.10',
  '87654321',
  '876543.21',
  '876,543.21',
  'Mill by the weir',
  'wendela@far.example',
  '91.3 cm'
];

/** Fills a house; the database is the application's. */
export async function makeProps(house: House): Promise<Props> {
  const { scope } = house.owner;
  const db = database();
  const rows = await makeOrder(scope, { number: 7 });
  await db('studios').where({ id: house.id }).update({ last_order_number: 7 });
  const typed = JSON.stringify({ fullWidth: '104 cm', usableWidth: '100 cm' });
  await db('cloths').where({ id: rows.main }).update({ price: price.main, typed });
  await db('cloths').where({ id: rows.lining }).update({ price: price.lining, typed });
  const { style_id: style } = await db('style_versions').where({ id: rows.styleVersion }).first('style_id');

  const { id: lay } = await lays.create(scope, { orderId: rows.order, clothId: rows.main, name: 'First' });
  const layDocument = good((await lays.read(scope, lay)).document);
  await lays.save(scope, lay, { version: 1, saveId: newId(), document: layDocument });
  const { version: layVersion } = await lays.read(scope, lay);
  const kept = await layRelease.keep(scope, lay, { version: layVersion, name: 'Kept' });

  const { id: releasedLay } = await lays.create(scope, {
    orderId: rows.order,
    clothId: rows.lining,
    name: 'Lining'
  });
  const loose = (await lays.read(scope, releasedLay)).document;
  const placements = [
    {
      id: 'p1',
      panel: 'inside',
      garment: loose.garments[0]!.id,
      x: 0,
      y: 100,
      turn: 0,
      flip: false,
      locked: false
    }
  ];
  await lays.save(scope, releasedLay, { version: 1, saveId: newId(), document: { ...loose, placements } });
  const { version } = await lays.read(scope, releasedLay);
  await layRelease.release(scope, releasedLay, { version, name: 'For cutting' });

  const clothLength = await clothLengths.create(scope, rows.main, {
    kind: 'roll',
    name: 'Roll 1',
    length: 5000,
    usableWidth: 990,
    typed: { length: '5 m', usableWidth: '99 cm' },
    outline: null,
    batch: 'B7',
    place: 'Top shelf',
    note: '',
    price: { minor: price.main, unit: 'metre' }
  });
  const { flaw: clothFlaw } = await clothLengths.addFlaw(scope, clothLength, {
    fromEnd: 4000,
    fromSelvedge: 300,
    along: 20,
    across: 5,
    hole: false,
    note: 'slub'
  });
  const dot = await sharp({ create: { width: 8, height: 8, channels: 3, background: '#2F5D7C' } })
    .png()
    .toBuffer();
  const photo = await createPicture(scope, { name: 'roll.png', bytes: dot });
  await clothLengths.setPhoto(scope, clothLength, photo.id);
  const clothWidth = await clothWidths.create(scope, rows.main, {
    seller: 'Weir mill',
    fullWidth: 1140,
    usableWidth: 1100,
    buyStep: 100,
    price: { minor: price.main, unit: 'metre' }
  });
  const { version: clothLengthVersion } = await clothLengths.read(scope, clothLength);

  const upload = await imports.create(scope, {
    name: 'sample.svg',
    bytes: readFileSync('static/sample.svg')
  });
  registerAllJobs();
  const print = (choice: unknown) => guides.create(scope, kept.id, guideChoiceSchema.parse(choice));
  const { job: guide } = await print({ kind: 'sheets', paper: 'A4' });
  await new JobRunner().drain();
  const { job: waitingGuide } = await print({ kind: 'whole' });
  const { job: settled } = await settleRuns.create(scope, lay, {
    version: layVersion,
    budgetSeconds: 60,
    from: 'scratch',
    pieces: 'all'
  });
  const best: SettleBest = {
    placements: layDocument.placements,
    length: 720,
    efficiency: 0.5,
    leftOver: 0,
    at: 1
  };
  await db('jobs')
    .where({ id: settled })
    .update({ progress: JSON.stringify({ seconds: 1, evaluations: 1, turns: 1, best, ended: null }) });
  await jobs.stop(scope, settled);
  const money = await makeMoney(scope, rows);
  const client = await clients.create(scope, {
    name: 'Wendela',
    email: 'wendela@far.example',
    phone: '',
    note: ''
  });
  const measurementSet = await measurementSets.create(scope, client, {
    takenOn: '2026-05-31',
    takenBy: 'Piet',
    posture: '',
    worn: '',
    measured: [
      { point: 'bust', side: 'both', mm: 913, typed: '91.3 cm', second: null },
      { point: 'waist', side: 'both', mm: 720, typed: '72 cm', second: null }
    ]
  });
  const sizeChart = await sizeCharts.create(scope, 'House sizes', [
    { size: 'S', body: { waist: 680, hip: 940 } }
  ]);
  const draftRun = await draftRuns.create(scope, 'circle-skirt', { kind: 'set', set: measurementSet }, {});
  const jar = cookieJar();
  await sessions.start(jar, house.owner.id, house.id, 'another browser of the owner');
  return {
    studio: house.id,
    client,
    measurementSet,
    sizeChart,
    draftRun,
    cutter: house.cutter.id,
    order: rows.order,
    item: rows.item,
    style,
    styleVersion: rows.styleVersion,
    cloth: rows.main,
    lining: rows.lining,
    clothLength,
    clothLengthVersion: String(clothLengthVersion),
    clothFlaw,
    clothWidth,
    lay,
    layVersion,
    layDocument,
    revision: kept.id,
    hash: kept.hash,
    releasedLay,
    upload,
    file: (await imports.read(scope, upload)).fileId,
    guide,
    waitingGuide,
    settled,
    ...money,
    invitation: await invitations.create(scope, { email: 'guest@far.example', role: 'cutter' }),
    session: (await sessions.list(house.owner.id))[0]!.publicId
  };
}

async function makeMoney(
  scope: Scope,
  rows: OrderRows
): Promise<Pick<Props, 'payment' | 'clientLink' | 'question'>> {
  const own = (byHand: number) => ({ byHand, own: false });
  await prices.save(scope, rows.order, 0, {
    ...emptySheet,
    cloths: { [rows.main]: own(price.main), [rows.lining]: own(price.lining) }
  });
  const words = { dates: '', alterations: '', exclusions: '', terms: 'By hand.' };
  await quotes.create(scope, rows.order, { validUntil: '2099-01-01', fittings: 2, ...words });
  // Quoted already: sending would move the stage, and count the order's version.
  await database()('orders').where({ id: rows.order }).update({ stage: 'quoted' });
  const to = 'ada@far.example';
  await quotes.send(scope, rows.order, 1, to);
  const payment = newId();
  await payments.recordByHand(scope, rows.order, {
    id: payment,
    kind: 'deposit',
    method: 'cash',
    amount: price.main,
    day: '2026-05-30',
    note: '',
    receiptTo: null
  });
  const { id: clientLink } = await clientLinks.create(database(), scope, rows.order, to);
  const question = newId();
  await orderQuestions.ask(
    { id: clientLink, studio: scope.studio, order: rows.order, sentTo: to },
    question,
    'When?'
  );
  return { payment, clientLink, question };
}
