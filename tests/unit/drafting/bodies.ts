import type { Body, PointId } from '$lib/drafting/measurement-points';
import { randomFrom } from '$lib/settle/random';

/*
 * Invented bodies for the tests: rows between the smallest and the largest of a table, with deviations of their own.
 * Girths: women's block sizes of W. Aldrich, Metric Pattern Cutting for Women's Wear, 6th ed. 2015, as reproduced, not checked
 * against the original (bust, waist, hips, back width, shoulder, neck, top arm); the lengths beside them are our own steps around the
 * values remembered for bust 88 (armscye depth 21, nape to waist 41, waist to hip 20.6, body rise 28, wrist 16: from memory).
 */

const rows: readonly Record<PointId, number>[] = [
  row(800, 640, 880, 324, 117.5, 350, 260, -2),
  row(840, 680, 920, 334, 120, 360, 272, -1),
  row(880, 720, 960, 344, 122.5, 370, 284, 0),
  row(920, 760, 1000, 354, 125, 380, 296, 1),
  row(960, 800, 1040, 364, 127.5, 390, 308, 2),
  row(1000, 840, 1080, 374, 130, 400, 320, 3),
  row(1040, 880, 1120, 384, 132.5, 410, 336, 4),
  row(1100, 940, 1180, 398, 136, 420, 352, 5),
  row(1160, 1000, 1240, 412, 139, 430, 368, 6),
  row(1220, 1060, 1320, 426, 142, 440, 384, 7)
];

function row(
  bust: number,
  waist: number,
  hip: number,
  backWidth: number,
  shoulderLength: number,
  neckBase: number,
  upperArm: number,
  step: number
): Record<PointId, number> {
  return {
    bust,
    underBust: bust - 120 - 2 * step,
    highBust: bust - 35,
    waist,
    topHip: (waist + hip) / 2 + 20,
    hip,
    neckBase,
    acrossShoulder: backWidth + 46,
    shoulderLength,
    armscyeDepth: 210 + 5 * step,
    armscyeGirth: bust / 2 - 20,
    bustSpan: 180 + 8 * step,
    shoulderToBustPoint: 260 + 9 * step,
    shoulderToUnderBust: 335 + 10 * step,
    shoulderToWaist: 425 + 7 * step,
    underBustToWaist: 90 - 3 * step,
    underarmToWaist: 205,
    hemGirth: hip - 20,
    backNeckToWaist: 410 + 4 * step,
    backWidth,
    waistToHip: 206 + 2 * step,
    waistToKnee: 585,
    waistToFloor: 1040,
    insideLeg: 780,
    crotchDepth: 280 + 5 * step,
    upperArm,
    elbow: upperArm - 25,
    wrist: 160 + 4 * step,
    armLength: 585
  };
}

export const smallest: Body = rows[0]!;
export const middle: Body = rows[2]!;
export const largest: Body = rows[rows.length - 1]!;

const girths: readonly PointId[] = [
  'bust',
  'underBust',
  'highBust',
  'waist',
  'topHip',
  'hip',
  'neckBase',
  'armscyeGirth',
  'hemGirth',
  'upperArm',
  'elbow',
  'wrist'
];

/** `count` bodies between the rows, each girth up to 6 % and each length up to 5 % off, as they pass the plainest cross checks. */
export function bodies(count: number, seed: number): Body[] {
  const random = randomFrom(seed);
  const found: Body[] = [];
  while (found.length < count) {
    const at = random() * (rows.length - 1);
    const low = rows[Math.floor(at)]!;
    const high = rows[Math.ceil(at)]!;
    const share = at - Math.floor(at);
    const body = Object.fromEntries(
      Object.keys(low).map((key) => {
        const id = key as PointId;
        const off = girths.includes(id) ? 0.06 : 0.05;
        const between = low[id] + share * (high[id] - low[id]);
        return [id, Math.round(between * (1 + off * (2 * random() - 1)) * 10) / 10];
      })
    ) as Record<PointId, number>;
    if (body.underBust >= body.bust - 40 || body.waist >= body.hip || body.waist > body.underBust + 60)
      continue;
    if (body.shoulderToUnderBust < body.shoulderToBustPoint + 45) continue;
    if (body.shoulderToWaist < body.shoulderToUnderBust + 40) continue;
    found.push(body);
  }
  return found;
}
