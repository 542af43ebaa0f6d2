/*
 * The points at which a body is measured, by the ids that drafts, sets of measurements and size tables share. All are
 * lengths along the body or girths around it, in millimetres. Terms and clauses as ISO 8559-1:2017 is cited second-hand; not checked
 * against the standard's own text.
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

/** Where the tape runs on our own figure (seen from the front, or from behind), in hundredths of the figure's height. */
export interface TapeLine {
  readonly view: 'front' | 'back';
  readonly from: readonly [x: number, y: number];
  readonly to: readonly [x: number, y: number];
}

export interface MeasurementPoint {
  readonly id: PointId;
  readonly label: string;
  /** The standard's term, with its clause where we know it. */
  readonly term: string;
  readonly kind: 'girth' | 'length';
  /** Whether left and right may differ enough to be measured apart. */
  readonly sided: boolean;
  readonly how: string;
  readonly tape: TapeLine;
}

const girth = (
  id: PointId,
  label: string,
  term: string,
  how: string,
  y: number,
  half: number,
  more: { readonly sided?: boolean; readonly x?: number } = {}
): MeasurementPoint => ({
  id,
  label,
  term,
  kind: 'girth',
  sided: more.sided ?? false,
  how,
  tape: { view: 'front', from: [(more.x ?? 0) - half, y], to: [(more.x ?? 0) + half, y] }
});

const length = (
  id: PointId,
  label: string,
  term: string,
  how: string,
  view: 'front' | 'back',
  from: readonly [number, number],
  to: readonly [number, number],
  sided = false
): MeasurementPoint => ({ id, label, term, kind: 'length', sided, how, tape: { view, from, to } });

/** Every point, in the order in which one measures: girths from above, then front, back, and down. */
export const measurementPoints: readonly MeasurementPoint[] = [
  girth(
    'highBust',
    'High bust',
    'upper chest girth',
    'Close under the arms, above the breasts, level all round.',
    25,
    9.5
  ),
  girth(
    'bust',
    'Bust',
    'bust girth (5.3.4)',
    'Level, over the bust points, in the bra that will be worn.',
    28.5,
    10
  ),
  girth(
    'underBust',
    'Under-bust',
    'under-bust girth (5.3.8)',
    'Level, just below the breasts, close to the ribs.',
    33,
    8.8
  ),
  girth(
    'waist',
    'Waist',
    'waist girth (5.3.10)',
    'Level, midway between the lowest rib and the top of the hip bone. Tie a tape there first.',
    38.5,
    7.6
  ),
  girth('topHip', 'Top hip', 'top-hip girth (5.3.12)', 'Level, midway between waist and hip.', 43, 9.2),
  girth('hip', 'Hip', 'hip girth (5.3.13)', 'Level, where the seat stands out most.', 48, 10.6),
  girth(
    'hemGirth',
    'Girth at the hem',
    'girth at the hem of the garment',
    'Level, where the garment will end, if that is not the hip.',
    45.5,
    10
  ),
  girth(
    'neckBase',
    'Neck base',
    'neck-base girth (5.3.3)',
    'Over the back neck point and the pit of the neck, the tape standing on its edge.',
    17,
    3.6
  ),
  length(
    'acrossShoulder',
    'Across the shoulders',
    'across-back shoulder width (5.4.3)',
    'From shoulder point to shoulder point, over the back neck point.',
    'back',
    [-10, 19.5],
    [10, 19.5]
  ),
  length(
    'shoulderLength',
    'Shoulder length',
    'shoulder length',
    'From where neck and shoulder meet to the shoulder point.',
    'front',
    [3.4, 17.2],
    [9.8, 19.3],
    true
  ),
  length(
    'bustSpan',
    'Bust point to bust point',
    'bust point width',
    'Straight across from bust point to bust point.',
    'front',
    [-4.6, 28.5],
    [4.6, 28.5]
  ),
  length(
    'shoulderToBustPoint',
    'Shoulder to bust point',
    'neck-shoulder point to bust point',
    'From where neck and shoulder meet, down to the bust point.',
    'front',
    [3.4, 17.2],
    [4.6, 28.5],
    true
  ),
  length(
    'shoulderToUnderBust',
    'Shoulder to under-bust',
    'neck-shoulder point to under-bust',
    'The same, on over the bust point to just below the breast.',
    'front',
    [3.4, 17.2],
    [4.6, 33],
    true
  ),
  length(
    'shoulderToWaist',
    'Shoulder to waist, front',
    'neck-shoulder point to waist, front',
    'The same, on to the waist.',
    'front',
    [3.4, 17.2],
    [4.4, 38.5],
    true
  ),
  length(
    'underBustToWaist',
    'Under-bust to waist',
    'under-bust to waist',
    'Below the bust point, straight down to the waist.',
    'front',
    [4.6, 33],
    [4.4, 38.5]
  ),
  length(
    'armscyeDepth',
    'Armscye depth',
    'scye depth',
    'From the back neck point down to the level of the underarm: a card under both arms shows it.',
    'back',
    [0, 17],
    [0, 25.5]
  ),
  girth(
    'armscyeGirth',
    'Armscye girth',
    'armscye girth',
    'Round the arm where the sleeve is set in, over the shoulder point and under the arm.',
    22.5,
    2.6,
    { sided: true, x: 9.6 }
  ),
  length(
    'backWidth',
    'Back width',
    'back width',
    'Across the back from armhole to armhole, midway between shoulder and underarm.',
    'back',
    [-8.8, 22.3],
    [8.8, 22.3]
  ),
  length(
    'backNeckToWaist',
    'Back neck point to waist',
    'back neck point to waist (5.4.5)',
    'From the seventh neck bone down the spine to the waist.',
    'back',
    [0, 17],
    [0, 38.5]
  ),
  length(
    'underarmToWaist',
    'Underarm to waist',
    'underarm to waist',
    'Down the side from the underarm to the waist.',
    'front',
    [9.2, 25.5],
    [7.6, 38.5],
    true
  ),
  length(
    'waistToHip',
    'Waist to hip',
    'waist to hips',
    'Down the side from the waist to the hip.',
    'front',
    [7.6, 38.5],
    [10.4, 48],
    true
  ),
  length(
    'waistToKnee',
    'Waist to knee',
    'waist to knee',
    'Down the front from the waist to the middle of the knee.',
    'front',
    [4.4, 38.5],
    [5.4, 71]
  ),
  length(
    'waistToFloor',
    'Waist to floor',
    'waist to ground, side',
    'Down the side from the waist to the floor, in the shoes that will be worn.',
    'front',
    [7.6, 38.5],
    [9, 99],
    true
  ),
  length(
    'crotchDepth',
    'Crotch depth',
    'body rise',
    'Seated on a hard chair: from the waist down the side to the seat of the chair.',
    'back',
    [8, 38.5],
    [8.6, 50.5]
  ),
  length(
    'insideLeg',
    'Inside leg',
    'inside leg length',
    'From the crotch down the inside of the leg to the floor.',
    'front',
    [0.8, 50.5],
    [2.6, 97]
  ),
  girth(
    'upperArm',
    'Upper arm',
    'upper-arm girth (5.3.16)',
    'Midway between shoulder point and elbow, arm hanging.',
    28,
    2.4,
    { sided: true, x: 12.6 }
  ),
  girth('elbow', 'Elbow', 'elbow girth', 'Round the bent elbow.', 38, 2, { sided: true, x: 14.6 }),
  girth('wrist', 'Wrist', 'wrist girth (5.3.19)', 'Over the wrist bone.', 49, 1.5, { sided: true, x: 17 }),
  length(
    'armLength',
    'Arm length',
    'outer arm length (5.7.8)',
    'From the shoulder point over the slightly bent elbow to the wrist bone.',
    'back',
    [10, 19.5],
    [17, 49],
    true
  )
];

export function pointOf(id: PointId): MeasurementPoint {
  return measurementPoints.find((point) => point.id === id)!;
}
