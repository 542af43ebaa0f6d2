/*
 * The points at which a body is measured, by the ids that drafts, sets of measurements and size tables share. All are
 * lengths along the body or girths around it, in millimetres.
 */

export const pointIds = [
  'bust',
  'underBust',
  'highBust',
  'waist',
  'topHip',
  'hip',
  'neckBase',
  'acrossShoulder',
  'shoulderLength',
  'armscyeDepth',
  'armscyeGirth',
  /** Bust point to bust point. */
  'bustSpan',
  /** From the shoulder, where the neck meets it. */
  'shoulderToBustPoint',
  'shoulderToUnderBust',
  'shoulderToWaist',
  'underBustToWaist',
  'underarmToWaist',
  /** Girth of the body at the level of the garment's hem. */
  'hemGirth',
  'backNeckToWaist',
  'backWidth',
  'waistToHip',
  'waistToKnee',
  'waistToFloor',
  'insideLeg',
  'crotchDepth',
  'upperArm',
  'elbow',
  'wrist',
  'armLength'
] as const;
export type PointId = (typeof pointIds)[number];

/** What is known of a body, in millimetres. */
export type Body = Readonly<Partial<Record<PointId, number>>>;
