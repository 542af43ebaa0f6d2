import { describe, expect, it } from 'vitest';
import { angleBetween, formatAngle, lineAngleBetween, parseAngle, signedTurn } from '$lib/units/angle';

describe('angles', () => {
  it('are read from degrees', () => {
    expect(parseAngle('12,5°')).toEqual({ degrees: 12.5 });
    expect(parseAngle('−2.5')).toEqual({ degrees: -2.5 });
    expect(parseAngle('3 degrees')).toEqual({ degrees: 3 });
    expect(parseAngle('east').error).toContain('is not an angle');
  });
  it('are compared the short way round', () => {
    expect(signedTurn(270)).toBe(-90);
    expect(signedTurn(-180)).toBe(180);
    expect(angleBetween(359, 2)).toBe(3);
    expect(lineAngleBetween(1, 179)).toBe(2);
    expect(formatAngle(-2.504)).toBe('−2.5°');
  });
});
