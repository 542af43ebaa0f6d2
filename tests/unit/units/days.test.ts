import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { dayAt, daysBetween, formatDay, formatInstant } from '$lib/units/days';
import { runs } from '../../runs';

describe('days and instants', () => {
  test('an instant falls on the day of its zone', () => {
    const instant = Date.UTC(2026, 11, 31, 23, 30);
    expect(dayAt(instant, 'UTC')).toBe('2026-12-31');
    expect(dayAt(instant, 'Asia/Tokyo')).toBe('2027-01-01');
    expect(dayAt(instant, 'America/New_York')).toBe('2026-12-31');
    expect(formatInstant(instant, 'Asia/Tokyo')).toBe('1 Jan 2027, 08:30');
  });

  test('a day is shown as it is stored, in whatever zone this machine is', () => {
    expect(formatDay('2026-05-31')).toBe('31 May 2026');
  });

  test('days are counted whole, also over a change of the clock', () => {
    expect(daysBetween('2026-03-28', '2026-03-30')).toBe(2);
    expect(daysBetween('2028-02-28', '2028-03-01')).toBe(2);
    expect(daysBetween('2026-12-02', '2026-12-01')).toBe(-1);
  });

  test('counting forth and back gives the same day', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 40_000 }), fc.integer({ min: 0, max: 40_000 }), (a, b) => {
        const day = (n: number) => dayAt(n * 86_400_000, 'UTC');
        expect(daysBetween(day(a), day(b))).toBe(b - a);
      }),
      { seed: 7, numRuns: runs(200) }
    );
  });
});
