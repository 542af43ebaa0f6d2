import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { readingsOf } from '$lib/lay/readings';
import * as demo from '$lib/server/demo';
import { newId } from '$lib/server/ids';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import * as jobs from '$lib/server/jobs';
import * as layList from '$lib/server/lay-list';
import * as lays from '$lib/server/lays';
import { readListing } from '$lib/server/listing';
import type { Scope } from '$lib/server/scope';
import * as settleRuns from '$lib/server/settle-runs';
import { laidBy, newStops, type SettleChoice, type SettleProgress } from '$lib/settle/run';
import { makeCast, type Cast } from './cast';

/*
 * Settle on the demo's orders, by the lay's own check: nothing stops a settled lay but what stopped it before.
 */

let cast: Cast;
let scope: Scope;

beforeAll(async () => {
  cast = await makeCast();
  registerAllJobs();
  scope = cast.here.owner.scope;
  await demo.fill(scope);
});
afterAll(() => cast.close());

const named = async (name: string) => {
  const { rows } = await layList.list(scope, readListing(new URLSearchParams(), layList.laySorts, 'order'));
  return lays.read(scope, rows.find((row) => row.name === name)!.id);
};

async function settle(lay: lays.Lay, choice: Partial<SettleChoice>): Promise<SettleProgress> {
  const { job } = await settleRuns.create(scope, lay.id, {
    budgetSeconds: 2,
    from: 'scratch',
    pieces: 'all',
    seed: 1,
    ...choice,
    version: lay.version
  });
  await new JobRunner().drain();
  const { result, error } = await jobs.read(scope, job);
  expect(error).toBeNull();
  return result as SettleProgress;
}

describe('a settled lay of the demo', () => {
  it('on napped cloth with pairs has no finding that stops, and is denser than the one laid by hand', async () => {
    const lay = await named('First lay');
    expect(lay.document.strip.nap).not.toBe('none');
    for (const from of ['scratch', 'here'] as const) {
      const { best } = await settle(lay, { from });
      const after = check(laidBy(lay.document, best!), lay.panels);
      expect(after.findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
      expect(best!.leftOver).toBe(0);
      expect(best!.length).toBeLessThan(readingsOf(lay.document, lay.panels).lengthUsed);
    }
  });

  it('of a spoilt lay mends every fault of it: hands, grain, edges, overlaps and what was forgotten', async () => {
    const lay = await named('In a hurry');
    const { best } = await settle(lay, {});
    const { findings, readings } = check(laidBy(lay.document, best!), lay.panels);
    expect(findings).toEqual([]);
    expect(readings.pieces.loose).toBe(0);
  });

  it('of only the loose pieces of a spoilt lay adds no fault to those that stay', async () => {
    const lay = await named('In a hurry');
    const { best } = await settle(lay, { pieces: 'loose', from: 'here' });
    const before = { document: lay.document, verdict: check(lay.document, lay.panels) };
    const document = laidBy(lay.document, best!);
    const after = { document, verdict: check(document, lay.panels) };
    expect(newStops(before, after, best!.leftOver)).toEqual([]);
    expect(document.placements).toEqual(expect.arrayContaining(lay.document.placements));
    expect(document.placements.length).toBeGreaterThan(lay.document.placements.length);
  });

  it('keeps flaws, clearance, locks and a measured length', async () => {
    const lay = await named('First lay');
    const last = lay.document.placements.at(-1)!;
    const document: LayDocument = {
      ...lay.document,
      strip: {
        ...lay.document.strip,
        clearance: 7,
        length: 4000,
        flaws: [
          { id: 'f1', x: 500, y: 400, along: 0, across: 0, radius: 60, note: 'Slub' },
          { id: 'f2', x: 900, y: 900, along: 0, across: 0, radius: 15, note: '' }
        ]
      },
      placements: lay.document.placements.map((one) =>
        one === last ? { ...one, x: one.x + 40, locked: true } : one
      )
    };
    const { version } = await lays.save(scope, lay.id, { version: lay.version, saveId: newId(), document });
    const { best } = await settle({ ...lay, version }, { from: 'scratch' });
    const laid = laidBy(document, best!);
    expect(check(laid, lay.panels).findings).toEqual([]);
    expect(laid.placements).toContainEqual(document.placements.at(-1));
  });
});
