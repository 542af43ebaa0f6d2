import { expect, test } from 'vitest';
import { withParams } from '$lib/components/list-address';

const here = new URL('http://localhost/orders?q=a%20b&sort=due&page=3');

test('a new sort keeps the search and goes back to the first page', () => {
  expect(withParams(here, { sort: '-due' })).toBe('?q=a+b&sort=-due');
});

test('a new page keeps everything else', () => {
  expect(withParams(here, { page: 4 })).toBe('?q=a+b&sort=due&page=4');
});

test('with nothing left it is the bare path, not an empty question mark', () => {
  expect(withParams(here, { q: null, sort: '' })).toBe('/orders');
});
