import { snap } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { choiceOf, foldDepths, spreadOf } from './spread';
import type { Flaw, Given, Strip } from './strip';
import { asLaid } from './shrinkage';

/*
 * How a roll or remnant that was measured in lies on the table. It is measured from its own start; a lay begins after
 * the end allowance. A cloth that is shrunk before it is laid lies shorter and narrower than it was measured.
 */

/** A length as it was measured in. */
export interface MeasuredLength {
  readonly given: Given;
  readonly length: Millimetres;
  readonly usableWidth: Millimetres;
  readonly fullWidth: Millimetres;
  /** x from its start, y from where the usable width begins. */
  readonly flaws: readonly Flaw[];
}

/** `strip` as the measured length makes it: length, width, edge and flaws; everything else stays as it is. */
export function onMeasuredLength(strip: Strip, measured: MeasuredLength): Strip {
  const { shrinkage, endAllowance } = strip;
  const one = asLaid(shrinkage, { along: 1, across: 1 });
  const along = (mm: Millimetres): Millimetres => snap(mm * one.along);
  const across = (mm: Millimetres): Millimetres => snap(mm * one.across);
  const usableWidth = across(measured.usableWidth);
  const fullWidth = Math.max(usableWidth, across(measured.fullWidth));
  const laid: Strip = {
    ...strip,
    given: {
      ...measured.given,
      outline: measured.given.outline?.map(({ x, y }) => ({ x: along(x), y: across(y) })) ?? null
    },
    length: along(measured.length),
    usableWidth,
    fullWidth,
    spread: withWidth(strip, { usableWidth, fullWidth }),
    flaws: measured.flaws.map((flaw) => ({
      ...flaw,
      x: along(flaw.x),
      y: across(flaw.y),
      along: along(flaw.along),
      across: across(flaw.across)
    })),
    endAllowance: { start: 0, end: 0 }
  };
  return withEnds(laid, endAllowance);
}

/** The same kind of spread on another usable width; a strip whose width stays keeps its own. */
export function withWidth(strip: Strip, width: Pick<Strip, 'usableWidth' | 'fullWidth'>): Strip['spread'] {
  if (width.usableWidth === strip.usableWidth) return strip.spread;
  const choice = choiceOf(strip);
  const { least, most } = foldDepths(width);
  const depth = choice.depth === null || choice.depth < least || choice.depth > most ? null : choice.depth;
  return spreadOf(width, { ...choice, depth });
}

/** `strip` with other end allowances: on a measured length the lay begins and ends elsewhere, so that its flaws and edge move. */
export function withEnds(strip: Strip, endAllowance: Strip['endAllowance']): Strip {
  if (!strip.given) return { ...strip, endAllowance };
  const before = strip.endAllowance;
  const by = endAllowance.start - before.start;
  const whole = (strip.length ?? 0) + before.start + before.end;
  return {
    ...strip,
    endAllowance,
    length: Math.max(1, snap(whole - endAllowance.start - endAllowance.end)),
    flaws: strip.flaws.map((flaw) => ({ ...flaw, x: snap(flaw.x - by) })),
    given: {
      ...strip.given,
      outline: strip.given.outline?.map(({ x, y }) => ({ x: snap(x - by), y })) ?? null
    }
  };
}
