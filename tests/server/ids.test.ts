import { describe, expect, it } from 'vitest';
import { newId } from '$lib/server/ids';

describe('an id', () => {
  it('is a UUID of version 7 that holds its moment', () => {
    const id = newId(1_790_000_000_123);
    expect(id).toMatch(/^[\da-f]{8}-[\da-f]{4}-7[\da-f]{3}-[89ab][\da-f]{3}-[\da-f]{12}$/);
    expect(parseInt(id.replace('-', '').slice(0, 12), 16)).toBe(1_790_000_000_123);
  });

  it('sorts after the one before, also within a millisecond', () => {
    const ids = Array.from({ length: 2000 }, () => newId(1_790_000_000_000));
    ids.push(newId(1_790_000_000_001));
    expect([...ids].sort()).toEqual(ids);
    expect(new Set(ids).size).toBe(ids.length);
  });
});
