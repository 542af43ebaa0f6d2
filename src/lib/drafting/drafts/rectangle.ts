import type { Edge, TurnSet } from '$lib/pattern/panel';
import { straight } from '../construction';
import type { DrawnPiece } from '../pieces';

/** A straight piece, `width` along x and `height` down, as bands and tiers are. */
export function rectangle(
  id: string,
  name: string,
  width: number,
  height: number,
  more: {
    /** Which way its grain runs. */
    readonly grain: 'along' | 'down' | 'bias';
    readonly howMany?: number;
    readonly allowance?: number;
    readonly lower?: { readonly role: Edge['role']; readonly allowance: number } | undefined;
    /** Notches of the lower edge, from the left. */
    readonly notchesBelow?: readonly number[];
    readonly note?: string;
  }
): DrawnPiece {
  const [a, b, c, d] = [
    { x: 0, y: 0 },
    { x: width, y: 0 },
    { x: width, y: height },
    { x: 0, y: height }
  ] as const;
  const allowance = more.allowance === undefined ? {} : { allowance: more.allowance };
  const middle = { x: width / 2, y: height / 2 };
  const turns: TurnSet = more.grain === 'bias' ? 'bias' : 'bothWays';
  return {
    id,
    name,
    symmetric: true,
    howMany: more.howMany ?? 1,
    turns,
    grain:
      more.grain === 'down'
        ? [
            { x: middle.x, y: 0.2 * height },
            { x: middle.x, y: 0.8 * height }
          ]
        : [
            { x: 0.2 * width, y: middle.y },
            { x: 0.8 * width, y: middle.y }
          ],
    edges: [
      { id: 'top', path: straight(a, b), ...allowance },
      { id: 'right', path: straight(b, c), ...allowance },
      {
        id: 'bottom',
        path: straight(d, c),
        backward: true,
        ...allowance,
        ...(more.lower ?? {}),
        ...(more.notchesBelow ? { notches: more.notchesBelow } : {})
      },
      { id: 'left', path: straight(a, d), backward: true, ...allowance }
    ],
    ...(more.note ? { note: more.note } : {})
  };
}
