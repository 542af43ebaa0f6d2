import type { Millimetres } from '$lib/units/measure';
import { pointOf, type Body, type PointId } from './measurement-points';

/*
 * Whether a measurement can be right. Limits for warning and refusing are our own judgement beside the quantiles of NHANES 2017 to March
 * 2020 (women of 18 and more, public domain); a difference of 1 cm between two readings follows the largest error that ISO 20685-1 allows
 * for large girths (9 mm; read in Gupta and Zakaria, Anthropometry, Apparel Sizing and Design).
 */

export interface Doubt {
  readonly point: PointId;
  /** `refused`: no body has it; `look`: measure again, or say that it is so. */
  readonly weight: 'refused' | 'look';
  readonly message: string;
}

/** Centimetres: look again outside the first two, refuse outside the last two. */
const ranges: Readonly<Record<PointId, readonly [number, number, number, number]>> = {
  bust: [70, 150, 55, 200],
  underBust: [60, 130, 50, 180],
  highBust: [68, 140, 53, 190],
  waist: [52, 150, 45, 190],
  topHip: [65, 155, 55, 195],
  hip: [75, 160, 65, 200],
  hemGirth: [52, 165, 45, 210],
  neckBase: [30, 52, 24, 65],
  acrossShoulder: [32, 50, 26, 60],
  shoulderLength: [9.5, 15.5, 7, 19],
  armscyeDepth: [16, 28, 12, 36],
  armscyeGirth: [32, 62, 26, 80],
  bustSpan: [14, 28, 11, 36],
  shoulderToBustPoint: [20, 38, 15, 50],
  shoulderToUnderBust: [26, 48, 20, 60],
  shoulderToWaist: [36, 56, 28, 68],
  underBustToWaist: [4, 18, 2, 26],
  underarmToWaist: [14, 28, 10, 36],
  backNeckToWaist: [34, 48, 28, 60],
  backWidth: [28, 48, 22, 60],
  waistToHip: [15, 28, 10, 36],
  waistToKnee: [50, 70, 38, 85],
  waistToFloor: [88, 120, 70, 140],
  insideLeg: [62, 92, 48, 110],
  crotchDepth: [22, 38, 17, 48],
  upperArm: [22, 48, 16, 62],
  elbow: [20, 42, 15, 55],
  wrist: [13, 22, 10, 28],
  armLength: [50, 68, 40, 80]
};

/** Two readings of a girth may differ by this much before it is measured again. */
export const READINGS_APART: Millimetres = 10;

const cm = (mm: number): string => `${Math.round(mm) / 10} cm`;

/** What speaks against the measurements of one set; `second` holds the second readings of girths. */
export function doubts(body: Body, second: Body = {}): Doubt[] {
  const found: Doubt[] = [];
  const look = (point: PointId, message: string) => found.push({ point, weight: 'look', message });
  for (const [id, value] of Object.entries(body) as [PointId, number][]) {
    const [low, high, least, most] = ranges[id].map((v) => v * 10) as [number, number, number, number];
    if (value < least || value > most)
      found.push({
        point: id,
        weight: 'refused',
        message: `${pointOf(id).label} is between ${cm(least)} and ${cm(most)}; ${cm(value)} can’t be.`
      });
    else if (value < low || value > high)
      look(id, `${cm(value)} is unusual: most bodies lie between ${cm(low)} and ${cm(high)}. Measure again.`);
    const other = second[id];
    if (other !== undefined && pointOf(id).kind === 'girth' && Math.abs(other - value) > READINGS_APART)
      look(id, `Two readings differ by ${cm(Math.abs(other - value))}: measure again.`);
  }
  const both = (a: PointId, b: PointId, test: (a: number, b: number) => boolean, message: string) => {
    const [x, y] = [body[a], body[b]];
    if (x !== undefined && y !== undefined && !test(x, y)) look(a, message);
  };
  const { bust, waist, hip, highBust } = body;
  if (bust !== undefined && body.underBust !== undefined && body.underBust >= bust)
    found.push({
      point: 'underBust',
      weight: 'refused',
      message: 'The under-bust is smaller than the bust. Look which of the two is wrong.'
    });
  if (bust !== undefined && waist !== undefined && (bust - waist < -50 || bust - waist > 350))
    look('waist', `Bust less waist is ${cm(bust - waist)}; usual is −5 to 35 cm. Measure both again.`);
  if (waist !== undefined && hip !== undefined && (hip - waist < 0 || hip - waist > 450))
    look('hip', `Hip less waist is ${cm(hip - waist)}; usual is 0 to 45 cm. Measure both again.`);
  both(
    'shoulderToUnderBust',
    'shoulderToBustPoint',
    (a, b) => a > b,
    'The under-bust lies below the bust point: look which of the two is wrong.'
  );
  both(
    'shoulderToWaist',
    'shoulderToUnderBust',
    (a, b) => a > b,
    'The waist lies below the under-bust: look which of the two is wrong.'
  );
  both(
    'backNeckToWaist',
    'armscyeDepth',
    (a, b) => a > b + 80,
    'Hardly anything is left between underarm and waist: measure both again.'
  );
  both(
    'waistToFloor',
    'waistToKnee',
    (a, b) => a > b + 200,
    'From the knee to the floor there would be less than 20 cm: measure both again.'
  );
  if (bust !== undefined && highBust !== undefined && highBust > bust + 20)
    look('highBust', 'The high bust is larger than the bust: look which of the two is wrong.');
  return found;
}

/**
 * Whether a size should be picked by the high bust: the bust is 5 cm or more larger (a fitting rule of several extension leaflets,
 * Texas among them).
 */
export function pickByHighBust(body: Body): boolean {
  return body.bust !== undefined && body.highBust !== undefined && body.bust - body.highBust >= 50;
}
