import type { Point } from '$lib/geometry/point';
import type { Path } from '$lib/pattern/panel';
import type { ImportFinding, Meaning, Reading } from './reading';

/* What both file formats are read into before lines are joined, nested and judged. Millimetres, y up. */

export interface Stroke {
  path: Path;
  /** Closed by the file's own words (Z, polygon, the closed flag). */
  closed: boolean;
  name: string;
  layer: string;
  group: string;
  meaning: Meaning;
  /** Why a grain line is one. */
  grain: 'layer' | 'name' | 'arrow' | null;
}

export interface Mark {
  at: Point;
  layer: string;
  group: string;
  kind: 'notch' | 'drill' | 'turn';
  note: string;
}

export interface DrawnText {
  text: string;
  at: Point;
  layer: string;
  group: string;
}

export interface Drawing {
  format: Reading['format'];
  title: string;
  units: Reading['units'];
  strokes: Stroke[];
  marks: Mark[];
  texts: DrawnText[];
  groups: { name: string; fields: Record<string, string> }[];
  findings: ImportFinding[];
}

/** Notes a finding: its kind, how much it weighs, the words, its place, what it is about, its measure. */
export type Find = (
  kind: string,
  severity: ImportFinding['severity'],
  message: string,
  place?: Point | null,
  about?: string | null,
  measure?: number | null
) => void;

/** Things that were passed over, counted by name, as findings at the end. */
export class Tally {
  readonly #counts = new Map<string, { count: number; place: Point | null }>();

  add(name: string, place: Point | null = null): void {
    const known = this.#counts.get(name);
    if (known) known.count += 1;
    else if (this.#counts.size < 200) this.#counts.set(name, { count: 1, place });
  }

  findings(
    kind: string,
    severity: ImportFinding['severity'],
    words: (name: string, count: number) => string
  ) {
    return [...this.#counts].map(([name, { count, place }]): ImportFinding => ({
      kind,
      severity,
      place,
      about: null,
      measure: count,
      message: words(name, count)
    }));
  }
}

/** `text` short enough to be stored and shown: control characters and runs of space become one space. */
export function shortText(text: string, most = 200): string {
  // eslint-disable-next-line no-control-regex
  const clean = text.replace(/[\u0000-\u001f\u007f\s]+/g, ' ').trim();
  return clean.length > most ? `${clean.slice(0, most - 1)}…` : clean;
}
