import { endOf, pathLength, straightPath, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { Degrees, Millimetres } from '$lib/units/measure';

/*
 * The drafting sheet: every step of a construction by name, with its formula, the number that it gave, and what it drew. The plane is
 * that of the paper: x to the right, y down.
 */

export type Mark =
  | { readonly kind: 'point'; readonly name: string; readonly at: Point }
  /** `line` for what the piece keeps, `guide` for what only helps, `level` for a line across the body. */
  | {
      readonly kind: 'path';
      readonly path: Path;
      readonly use: 'line' | 'guide' | 'level';
      readonly name: string;
    };

export interface SheetStep {
  /** From 1, in order. */
  readonly number: number;
  readonly title: string;
  /** How the number comes about, in the words of the measurements: 'B/4 + I'. */
  readonly formula: string;
  readonly value:
    | { readonly kind: 'length'; readonly mm: Millimetres }
    | { readonly kind: 'angle'; readonly degrees: Degrees }
    | null;
  /** Our reading of a hand method where that leaves something open: marked ~ on the sheet. */
  readonly ourReading: boolean;
  readonly marks: readonly Mark[];
}

export interface Sheet {
  /** What the sheet begins with: measurements and what they are called in the formulas. */
  readonly names: readonly { readonly name: string; readonly words: string; readonly mm: Millimetres }[];
  readonly steps: readonly SheetStep[];
}

interface How {
  readonly formula: string;
  readonly ourReading?: boolean;
}

/** Writes the sheet while a draft is drawn. Each call is one step and gives what it drew. */
export class Construction {
  readonly #names: { name: string; words: string; mm: Millimetres }[] = [];
  readonly #steps: SheetStep[] = [];

  /** A measurement or a choice under the name that the formulas use. */
  given(name: string, words: string, mm: Millimetres): Millimetres {
    this.#names.push({ name, words, mm });
    return mm;
  }

  /** A length that later steps use; draws nothing. */
  length(title: string, mm: Millimetres, how: How | string): Millimetres {
    this.#add(title, how, { kind: 'length', mm }, []);
    return mm;
  }

  angle(title: string, degrees: Degrees, how: How | string): Degrees {
    this.#add(title, how, { kind: 'angle', degrees }, []);
    return degrees;
  }

  /** A point by name. `value`: the one length of the step worth showing. */
  point(name: string, at: Point, how: How | string, value?: Millimetres): Point {
    this.#add(`Point ${name}`, how, value === undefined ? null : { kind: 'length', mm: value }, [
      { kind: 'point', name, at }
    ]);
    return at;
  }

  /** A line across the sheet at `y`, from x = `from` to x = `to`. */
  level(name: string, y: Millimetres, from: Millimetres, to: Millimetres, how: How | string): Millimetres {
    const path = straightPath([
      { x: from, y },
      { x: to, y }
    ]);
    this.#add(name, how, { kind: 'length', mm: y }, [{ kind: 'path', path, use: 'level', name }]);
    return y;
  }

  /** A line or curve that the piece keeps; its length is shown. */
  line(name: string, path: Path, how: How | string): Path {
    this.#add(name, how, { kind: 'length', mm: pathLength(path) }, [
      { kind: 'path', path, use: 'line', name }
    ]);
    return path;
  }

  /** A line or curve that only helps. */
  guide(name: string, path: Path, how: How | string): Path {
    this.#add(name, how, { kind: 'length', mm: pathLength(path) }, [
      { kind: 'path', path, use: 'guide', name }
    ]);
    return path;
  }

  sheet(): Sheet {
    return { names: this.#names, steps: this.#steps };
  }

  #add(title: string, how: How | string, value: SheetStep['value'], marks: readonly Mark[]): void {
    const { formula, ourReading = false } = typeof how === 'string' ? { formula: how } : how;
    this.#steps.push({ number: this.#steps.length + 1, title, formula, value, ourReading, marks });
  }
}

/** A straight line through points. */
export const straight = (...points: Point[]): Path => straightPath(points);

/** Several paths as one; each starts where the one before it ends, within 0.01 mm. */
export function joined(...paths: Path[]): Path {
  const [first, ...rest] = paths;
  if (!first) throw new RangeError('There is nothing to join');
  let end = endOf(first);
  for (const path of rest) {
    const gap = Math.hypot(path.from.x - end.x, path.from.y - end.y);
    if (gap > 0.01) throw new RangeError(`A path starts ${gap} mm from the end of the one before it`);
    end = endOf(path);
  }
  return { from: first.from, segments: paths.flatMap(({ segments }) => segments) };
}
