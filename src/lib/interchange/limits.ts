/*
 * What one upload may ask of the machine. Everything beyond is refused with the number that was found and the
 * number that is allowed; the worker's limits of time and memory stand behind these.
 */
export const LIMITS = {
  /** Bytes of an uploaded file. */
  bytes: 5 * 1024 * 1024,
  /** Elements of an SVG document. */
  elements: 50_000,
  /** Elements within elements, `use` within `use`. */
  depth: 64,
  /** Group code and value pairs of a DXF file. */
  pairs: 1_000_000,
  /** Things drawn, after `use`, INSERT and arrays are expanded. */
  drawn: 20_000,
  /** Lines and curves drawn, after expansion. */
  segments: 100_000,
  /** Lines and curves of one outline: what a panel can hold. */
  outlineSegments: 5_000,
  /** Closed outlines. */
  outlines: 2_000,
  /** INSERT within INSERT. */
  insertDepth: 16,
  texts: 5_000,
  /** Furthest from the origin, in mm. */
  coordinate: 1_000_000
} as const;

/** A file that is refused as a whole: `kind` is stable, the message is for the person. */
export class ReadingRefused extends Error {
  constructor(
    readonly kind: string,
    message: string
  ) {
    super(message);
    this.name = 'ReadingRefused';
  }
}

/** Counts what a reading draws and refuses it beyond the limits. */
export class Budget {
  #drawn = 0;
  #segments = 0;

  /** One more thing drawn. */
  draw(): void {
    this.#drawn += 1;
    if (this.#drawn > LIMITS.drawn)
      throw new ReadingRefused(
        'too-much-drawn',
        `The file draws more than ${LIMITS.drawn.toLocaleString('en')} things once repeated parts are counted. Keep only the panels and upload it again.`
      );
  }

  /** `count` more lines or curves. */
  segments(count: number): void {
    this.#segments += count;
    if (this.#segments > LIMITS.segments)
      throw new ReadingRefused(
        'too-many-segments',
        `The file has more than ${LIMITS.segments.toLocaleString('en')} lines and curves. Simplify the outlines, or upload the panels in several files.`
      );
  }
}
