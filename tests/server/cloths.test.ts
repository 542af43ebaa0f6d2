import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { clothForm } from '$lib/server/cloth-form';
import * as cloths from '$lib/server/cloths';
import { database, migrate, openDatabase, useDatabase } from '$lib/server/database';
import { readListing } from '$lib/server/listing';
import type { Scope } from '$lib/server/scope';

const owner: Scope = { studio: 'one', user: 'u', role: 'owner' };
const cutter: Scope = { ...owner, role: 'cutter' };
const foreign: Scope = { ...owner, studio: 'two' };

const lawn: cloths.ClothInput = {
  name: 'Lawn',
  fibre: 'cotton',
  fullWidth: 1420,
  usableWidth: 1390,
  typed: { fullWidth: '142 cm', usableWidth: '139 cm' },
  price: { minor: 1234, unit: 'yard' },
  sidesAlike: true,
  nap: 'none',
  colour: '#FFFDF8',
  supplierNote: 'Ask Vesna, 0999'
};

beforeEach(async () => {
  const db = openDatabase(':memory:');
  await migrate(db);
  useDatabase(db);
  for (const id of ['one', 'two']) await db('studios').insert({ id, name: id, created_at: 1 });
});

afterEach(async () => {
  await database().destroy();
  useDatabase(null);
});

const listing = (text = '') => readListing(new URLSearchParams(text), cloths.clothSorts, 'name', 2);

describe('cloths', () => {
  test('come back as they were put in', async () => {
    const id = await cloths.create(owner, lawn);
    expect(await cloths.read(owner, id)).toMatchObject({ ...lawn, id, archived: false });
  });

  test('neither price nor supplier note reaches a cutter, in one or in many', async () => {
    const id = await cloths.create(owner, lawn);
    for (const answer of [await cloths.read(cutter, id), await cloths.list(cutter, listing())]) {
      expect(JSON.stringify(answer)).not.toMatch(/1234|yard|Vesna|price|supplier/i);
    }
  });

  test("another studio's cloth is not there", async () => {
    const id = await cloths.create(owner, lawn);
    await expect(cloths.read(foreign, id)).rejects.toMatchObject({ status: 404 });
    await expect(cloths.update(foreign, id, lawn)).rejects.toMatchObject({ status: 404 });
    await expect(cloths.archive(foreign, id, true)).rejects.toMatchObject({ status: 404 });
    expect((await cloths.list(foreign, listing())).total).toBe(0);
  });

  test('a usable width beyond the full width is refused', async () => {
    await expect(cloths.create(owner, { ...lawn, usableWidth: 1421 })).rejects.toMatchObject({ status: 400 });
  });

  test('lists search, sort and page; a page beyond the last is the last', async () => {
    for (const [name, usableWidth] of [
      ['Loden', 1380],
      ['Lawn_a', 1400],
      ['Silk 50%', 900]
    ] as const)
      await cloths.create(owner, { ...lawn, name, usableWidth });
    const names = async (text: string) =>
      (await cloths.list(owner, listing(text))).rows.map((cloth) => cloth.name);
    expect(await names('')).toEqual(['Lawn_a', 'Loden']);
    expect(await names('page=9')).toEqual(['Silk 50%']);
    expect(await names('sort=-width')).toEqual(['Lawn_a', 'Loden']);
    expect(await names('q=LOD')).toEqual(['Loden']);
    expect(await names('q=%25')).toEqual(['Silk 50%']);
    expect(await names('q=_')).toEqual(['Lawn_a']);
    expect(await names('sort=price')).toEqual(['Lawn_a', 'Loden']);
  });

  test('archived cloths leave the list and the choices and can be put back', async () => {
    const id = await cloths.create(owner, lawn);
    await cloths.archive(owner, id, true);
    expect((await cloths.list(owner, listing())).total).toBe(0);
    expect((await cloths.list(owner, listing(), { archived: true })).total).toBe(1);
    expect(await cloths.choices(owner)).toEqual([]);
    await cloths.archive(owner, id, false);
    expect(await cloths.choices(owner)).toHaveLength(1);
  });
});

describe('the form of a cloth', () => {
  const read = (fields: Record<string, string>, unit: 'cm' | 'in' = 'cm') =>
    clothForm({ lengthUnit: unit, currency: 'EUR' }).safeParse({
      name: 'Lawn',
      fullWidth: '150',
      usableWidth: '58 1/2"',
      ...fields
    });
  const fault = (fields: Record<string, string>) =>
    read(fields).error?.issues.map((issue) => issue.path.join('.'));

  test('takes any unit and keeps the text, a bare number with the unit that it was meant in', () => {
    expect(read({}).data).toMatchObject({
      fullWidth: 1500,
      usableWidth: 1485.9,
      typed: { fullWidth: '150 cm', usableWidth: '58 1/2"' },
      price: null,
      sidesAlike: false,
      nap: 'none'
    });
    expect(read({ fullWidth: '60' }, 'in').data?.fullWidth).toBeCloseTo(1524, 6);
  });

  test('answers at the field', () => {
    expect(fault({ usableWidth: '151' })).toEqual(['usableWidth']);
    expect(fault({ fullWidth: '' })).toEqual(['fullWidth']);
    expect(fault({ fullWidth: 'wide' })).toEqual(['fullWidth']);
    expect(fault({ price: '12.345' })).toEqual(['price']);
    expect(fault({ name: ' ' })).toEqual(['name']);
    expect(fault({ nap: 'both' })).toEqual(['nap']);
    expect(fault({ colour: 'red' })).toEqual(['colour']);
  });
});
