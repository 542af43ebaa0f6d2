import type { Degrees } from './measure';
import { formatDecimal } from './length';

/** `angle` as the turn in −180 < a ≤ 180 that leads to the same direction. */
export function signedTurn(angle: Degrees): Degrees {
  const turn = ((angle % 360) + 360) % 360;
  return turn > 180 ? turn - 360 : turn;
}

/** How far apart two directions are, 0 to 180. */
export function angleBetween(a: Degrees, b: Degrees): Degrees {
  return Math.abs(signedTurn(a - b));
}

/** How far apart two lines are that have no sense of direction (a grain line), 0 to 90. */
export function lineAngleBetween(a: Degrees, b: Degrees): Degrees {
  const apart = angleBetween(a, b);
  return apart > 90 ? 180 - apart : apart;
}

export type AngleReading = { degrees: Degrees; error?: undefined } | { degrees?: undefined; error: string };

/** What a person typed, as degrees: `90`, `-2.5`, `12,5°`, `3 degrees`. */
export function parseAngle(text: string): AngleReading {
  const match = /^([-−–+]?)\s*(\d+(?:[.,]\d*)?|[.,]\d+)\s*(?:°|deg|degrees?)?$/i.exec(text.trim());
  if (!match) return { error: `“${text.trim()}” is not an angle. Write degrees such as 90, -2.5 or 12,5°.` };
  const size = Number(match[2]!.replace(',', '.'));
  if (size > 3600) return { error: `${match[2]}° is more than ten full turns.` };
  return { degrees: match[1] === '' || match[1] === '+' ? size : -size + 0 };
}

/** An angle as a person reads it: `12.5°`. */
export function formatAngle(angle: Degrees, decimals = 2): string {
  return `${formatDecimal(angle, decimals)}°`;
}
