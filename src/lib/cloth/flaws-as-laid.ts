import { spreadKind } from './spread';
import type { Flaw, Strip } from './strip';

/*
 * Flaws of a roll or remnant are measured on the open cloth. Spread in folds or plies the cloth lies on itself, and a flaw of
 * any layer keeps pieces off all of them, because a placement cuts through all.
 */

/** The flaws of a strip where they come to lie on its spread. On cloth that nobody measured in they are noted as they lie. */
export function flawsAsLaid(strip: Strip): readonly Flaw[] {
  const { flaws, given, length, usableWidth, endAllowance } = strip;
  if (!given || flaws.length === 0) return flaws;
  const kind = spreadKind(strip);
  /** From the start of the cloth itself to its end. */
  const whole = (length ?? 0) + endAllowance.start + endAllowance.end;
  const { layers, to: depth } = strip.spread[0]!;
  const atX = (flaw: Flaw, fromStart: number): Flaw => ({ ...flaw, x: fromStart - endAllowance.start });
  switch (kind) {
    case 'open':
      return flaws;
    case 'lengthwise':
      // The near side is folded over: its selvedge comes to lie at the depth of the fold.
      return flaws.map((flaw) => ({ ...flaw, y: Math.abs(flaw.y - depth) }));
    case 'tubular':
      return flaws.map((flaw) => ({ ...flaw, y: Math.min(flaw.y, usableWidth - flaw.y) }));
    case 'crosswise':
      return flaws.map((flaw) => ({ ...flaw, x: Math.abs(flaw.x + endAllowance.start - whole / 2) }));
    case 'pliesUp':
    case 'faceToFace': {
      const ply = whole / layers.length;
      return flaws.flatMap((flaw) => {
        const from = (flaw.x + endAllowance.start) % ply;
        const one = atX(flaw, from);
        if (kind === 'pliesUp') return [one];
        // Every other ply lies turned or laid back: which one this flaw is on shows only on the table.
        return [
          one,
          { ...atX(flaw, ply - from), id: `${flaw.id}'`, y: flaw.y },
          { ...one, id: `${flaw.id}''`, y: usableWidth - flaw.y },
          { ...atX(flaw, ply - from), id: `${flaw.id}'''`, y: usableWidth - flaw.y }
        ];
      });
    }
  }
}
