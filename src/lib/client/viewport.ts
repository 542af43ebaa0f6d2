import type { Box, Point } from '$lib/geometry/point';

/*
 * How the cloth is seen: pure maths between millimetres on the cloth and pixels of the canvas. `across` runs the
 * warp from left to right with the near selvedge below; `down` is the same table turned a quarter clockwise: the
 * warp from top to bottom, the near selvedge on the left. Both are seen from above; neither mirrors.
 */

export type Lie = 'across' | 'down';

export interface Viewport {
  readonly lie: Lie;
  /** Pixels per millimetre. */
  readonly scale: number;
  /** Where the cloth's zero (zero end, near selvedge) is on the canvas, in pixels. */
  readonly originX: number;
  readonly originY: number;
  /** Size of the canvas in pixels. */
  readonly width: number;
  readonly height: number;
}

/** A place on the canvas in pixels, y downwards. */
export interface ScreenPoint {
  readonly left: number;
  readonly top: number;
}

/** The smallest and the largest scale: 6 m on a phone, and a millimetre as wide as a finger tip. */
export const MIN_SCALE = 0.01;
export const MAX_SCALE = 20;

/** Where a place of the cloth is on the canvas. */
export function toScreen(view: Viewport, point: Point): ScreenPoint {
  return view.lie === 'across'
    ? { left: view.originX + point.x * view.scale, top: view.originY - point.y * view.scale }
    : { left: view.originX + point.y * view.scale, top: view.originY + point.x * view.scale };
}

/** Which place of the cloth is at a place of the canvas. */
export function toCloth(view: Viewport, at: ScreenPoint): Point {
  const dx = (at.left - view.originX) / view.scale;
  const dy = (at.top - view.originY) / view.scale;
  return view.lie === 'across' ? { x: dx, y: -dy } : { x: dy, y: dx };
}

/** A step on the canvas as a step on the cloth. */
export function stepToCloth(view: Viewport, dLeft: number, dTop: number): Point {
  return view.lie === 'across'
    ? { x: dLeft / view.scale + 0, y: -dTop / view.scale + 0 }
    : { x: dTop / view.scale + 0, y: dLeft / view.scale + 0 };
}

/** The part of the cloth that the canvas shows, widened by `margin` pixels all round. */
export function seen(view: Viewport, margin = 0): Box {
  const a = toCloth(view, { left: -margin, top: -margin });
  const b = toCloth(view, { left: view.width + margin, top: view.height + margin });
  return {
    minX: Math.min(a.x, b.x),
    minY: Math.min(a.y, b.y),
    maxX: Math.max(a.x, b.x),
    maxY: Math.max(a.y, b.y)
  };
}

/** `view` moved by pixels. */
export function panned(view: Viewport, dLeft: number, dTop: number): Viewport {
  return { ...view, originX: view.originX + dLeft, originY: view.originY + dTop };
}

/** `view` enlarged by `factor`, the cloth under `at` staying where it is. */
export function zoomed(view: Viewport, factor: number, at: ScreenPoint): Viewport {
  const scale = Math.min(MAX_SCALE, Math.max(MIN_SCALE, view.scale * factor));
  const k = scale / view.scale;
  return {
    ...view,
    scale,
    originX: at.left - (at.left - view.originX) * k,
    originY: at.top - (at.top - view.originY) * k
  };
}

/** `view` showing all of `box`, in the middle, with `padding` pixels free on every side. */
export function fitted(
  view: Viewport,
  box: Box,
  padding: { left: number; right: number; top: number; bottom: number }
): Viewport {
  const across = view.lie === 'across';
  const boxWidth = Math.max(1, across ? box.maxX - box.minX : box.maxY - box.minY);
  const boxHeight = Math.max(1, across ? box.maxY - box.minY : box.maxX - box.minX);
  const freeWidth = Math.max(20, view.width - padding.left - padding.right);
  const freeHeight = Math.max(20, view.height - padding.top - padding.bottom);
  const scale = Math.min(
    MAX_SCALE,
    Math.max(MIN_SCALE, Math.min(freeWidth / boxWidth, freeHeight / boxHeight))
  );
  const middle = { x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 };
  return centred({ ...view, scale }, middle, {
    left: padding.left + freeWidth / 2,
    top: padding.top + freeHeight / 2
  });
}

/** `view` with the cloth's `point` at the canvas's place `at`. */
export function centred(view: Viewport, point: Point, at: ScreenPoint): Viewport {
  const now = toScreen(view, point);
  return panned(view, at.left - now.left, at.top - now.top);
}

/** `view` with the table turned the other way, the cloth in the middle of the canvas staying there. */
export function turnedTable(view: Viewport): Viewport {
  const middle = { left: view.width / 2, top: view.height / 2 };
  const point = toCloth(view, middle);
  return centred({ ...view, lie: view.lie === 'across' ? 'down' : 'across' }, point, middle);
}

/** `view` on a canvas of another size, the cloth in the middle staying there. */
export function resized(view: Viewport, width: number, height: number): Viewport {
  return {
    ...view,
    width,
    height,
    originX: view.originX + (width - view.width) / 2,
    originY: view.originY + (height - view.height) / 2
  };
}

/** The lie that suits a canvas: a tall one has the warp running down. */
export function lieFor(width: number, height: number): Lie {
  return height > width * 1.1 ? 'down' : 'across';
}

/** The arrow of the keyboard as a direction on the cloth (one component is ±1, the other 0). */
export function arrowOnCloth(lie: Lie, key: 'ArrowLeft' | 'ArrowRight' | 'ArrowUp' | 'ArrowDown'): Point {
  const across = {
    ArrowLeft: { x: -1, y: 0 },
    ArrowRight: { x: 1, y: 0 },
    ArrowUp: { x: 0, y: 1 },
    ArrowDown: { x: 0, y: -1 }
  } as const;
  const down = {
    ArrowLeft: { x: 0, y: -1 },
    ArrowRight: { x: 0, y: 1 },
    ArrowUp: { x: -1, y: 0 },
    ArrowDown: { x: 1, y: 0 }
  } as const;
  return (lie === 'across' ? across : down)[key];
}

/** How a picture drawn for `from` must be moved and enlarged to stand for `to`; null when it can't (turned table). */
export function carried(
  from: Viewport,
  to: Viewport
): { readonly left: number; readonly top: number; readonly scale: number } | null {
  if (from.lie !== to.lie) return null;
  const scale = to.scale / from.scale;
  return { scale, left: to.originX - from.originX * scale, top: to.originY - from.originY * scale };
}
