import fontkit from '@pdf-lib/fontkit';
import { PDFDocument, PDFName, PDFNumber, PrintScaling, type PDFFont, type PDFPage } from 'pdf-lib';
import type { Point } from '$lib/geometry/point';
import type { Layer, Lettering, Mark, Page, Stroke, Surface, Weight, Words } from './drawing';
import { UNITS_PER_MM } from './papers';

/*
 * Pages of marks as a PDF. Content streams are written by hand, in millimetres under one scaling matrix, so that the
 * numbers in the file are those of the revision.
 */

/** The bytes of the two TrueType fonts that a guide is set in. */
export interface GuideFonts {
  readonly regular: Uint8Array;
  readonly bold: Uint8Array;
}

interface Face {
  readonly font: PDFFont;
  readonly has: (codePoint: number) => boolean;
  readonly widths: Map<string, number>;
  /** Text that was set before, as the file writes it, with its width at size 1: the same words stand on every sheet. */
  readonly set: Map<string, { readonly code: string; readonly width: number }>;
}

/** Width of the box that stands for a letter that the fonts lack, as a share of the size. */
const BOX = 0.6;

/** Words in runs: text that the font has, or one letter that it lacks. */
type Run = { readonly text: string; readonly known: true } | { readonly text: string; readonly known: false };

/** Collects pages into one file. Remembers every letter that it could not print. */
export class PdfWriter implements Lettering {
  readonly #missing = new Map<string, string>();

  private constructor(
    private readonly document: PDFDocument,
    private readonly faces: Readonly<Record<Weight, Face>>
  ) {}

  /** An empty file with its title; `at` in UTC milliseconds is its date. */
  static async open(fonts: GuideFonts, title: string, at: number): Promise<PdfWriter> {
    const document = await PDFDocument.create({ updateMetadata: false });
    document.registerFontkit(fontkit);
    document.setTitle(title, { showInWindowTitleBar: true });
    document.setProducer('Warpwise');
    document.setCreator('Warpwise');
    document.setCreationDate(new Date(at));
    document.setModificationDate(new Date(at));
    // Readers that heed it offer no scaling in their print dialogue.
    document.catalog.getOrCreateViewerPreferences().setPrintScaling(PrintScaling.None);
    const face = async (bytes: Uint8Array): Promise<Face> => {
      const read = fontkit.create(bytes);
      return {
        font: await document.embedFont(bytes, { subset: true }),
        has: (codePoint) => read.hasGlyphForCodePoint(codePoint),
        widths: new Map(),
        set: new Map()
      };
    };
    return new PdfWriter(document, { regular: await face(fonts.regular), bold: await face(fonts.bold) });
  }

  /** The letters that were printed as boxes so far, each with its code point: 'U+4E2D'. */
  get missing(): readonly { readonly letter: string; readonly codePoint: string }[] {
    return [...this.#missing].map(([letter, codePoint]) => ({ letter, codePoint }));
  }

  width(text: string, size: number, weight: Weight): number {
    const face = this.faces[weight];
    let width = face.widths.get(text);
    if (width === undefined) {
      width = this.#runs(text, face).reduce(
        (sum, run) => sum + (run.known ? face.font.widthOfTextAtSize(run.text, 1) : BOX),
        0
      );
      face.widths.set(text, width);
    }
    return width * size;
  }

  /** Adds a page. Its drawing goes into the file at once; nothing of it is kept in memory but the packed stream. */
  add(page: Page): void {
    const paper = this.document.addPage([page.width * UNITS_PER_MM, page.height * UNITS_PER_MM]);
    const out: string[] = [`q ${number(UNITS_PER_MM, 10)} 0 0 ${number(UNITS_PER_MM, 10)} 0 0 cm\n`];
    // Round joins: a mitred join would reach past the true corner.
    out.push('1 J 1 j\n');
    for (const layer of page.layers) this.#layer(out, layer, paper);
    out.push('Q\n');
    const stream = this.document.context.flateStream(out.join(''));
    paper.node.set(PDFName.of('Contents'), this.document.context.register(stream));
    // Said outright: a unit is 1/72 inch.
    paper.node.set(PDFName.of('UserUnit'), PDFNumber.of(1));
  }

  /** The finished file. */
  async bytes(): Promise<Uint8Array> {
    return this.document.save({ objectsPerTick: Infinity });
  }

  #layer(out: string[], layer: Layer, paper: PDFPage): void {
    out.push('q\n');
    if (layer.window) {
      const { minX, minY, maxX, maxY } = layer.window;
      out.push(`${number(minX)} ${number(minY)} ${number(maxX - minX)} ${number(maxY - minY)} re W n\n`);
    }
    out.push(`${number(layer.scale, 8)} 0 0 ${number(layer.scale, 8)} `);
    out.push(`${number(layer.origin.x)} ${number(layer.origin.y)} cm\n`);
    for (const mark of layer.marks) this.#mark(out, mark, paper);
    out.push('Q\n');
  }

  #mark(out: string[], mark: Mark, paper: PDFPage): void {
    switch (mark.kind) {
      case 'stroke':
        return stroke(out, mark);
      case 'surface':
        return fill(out, mark);
      case 'words':
        return this.#words(out, mark, paper);
    }
  }

  #words(out: string[], mark: Words, paper: PDFPage): void {
    const face = this.faces[mark.weight];
    const runs = this.#runs(mark.text, face);
    const radians = (mark.turn * Math.PI) / 180;
    const cos = Math.cos(radians);
    const sin = Math.sin(radians);
    const width = this.width(mark.text, mark.size, mark.weight);
    let along = mark.align === 'start' ? 0 : mark.align === 'middle' ? -width / 2 : -width;
    const at = (x: number, y: number): Point => ({
      x: mark.at.x + x * cos - y * sin,
      y: mark.at.y + x * sin + y * cos
    });
    for (const run of runs) {
      if (!run.known) {
        const inset = mark.size * 0.06;
        const box = [
          at(along + inset, 0),
          at(along + mark.size * BOX - inset, 0),
          at(along + mark.size * BOX - inset, mark.size * 0.7),
          at(along + inset, mark.size * 0.7)
        ];
        stroke(out, {
          kind: 'stroke',
          points: box,
          closed: true,
          pen: { width: mark.size * 0.05, shade: mark.shade, dash: [] }
        });
        along += mark.size * BOX;
        continue;
      }
      const set = setText(face, run.text);
      const start = at(along, 0);
      const name = mark.weight === 'bold' ? 'B' : 'R';
      paper.node.setFontDictionary(PDFName.of(name), face.font.ref);
      out.push(`BT /${name} ${number(mark.size)} Tf ${number(mark.shade)} g `);
      out.push(`${number(cos, 8)} ${number(sin, 8)} ${number(-sin, 8)} ${number(cos, 8)} `);
      out.push(`${number(start.x)} ${number(start.y)} Tm ${set.code} Tj ET\n`);
      along += set.width * mark.size;
    }
  }

  /** NFC, so that a letter and its accent are one glyph where the fonts have it. */
  #runs(text: string, face: Face): Run[] {
    const runs: { text: string; known: boolean }[] = [];
    for (const letter of text.normalize('NFC').replace(/\s/gu, ' ')) {
      const codePoint = letter.codePointAt(0)!;
      const known = face.has(codePoint);
      const last = runs.at(-1);
      if (known && last?.known) last.text += letter;
      else runs.push({ text: letter, known });
      if (!known) this.#missing.set(letter, `U+${codePoint.toString(16).toUpperCase().padStart(4, '0')}`);
    }
    return runs as Run[];
  }
}

function setText(face: Face, text: string): { readonly code: string; readonly width: number } {
  let set = face.set.get(text);
  if (!set) {
    set = { code: String(face.font.encodeText(text)), width: face.font.widthOfTextAtSize(text, 1) };
    face.set.set(text, set);
  }
  return set;
}

function stroke(out: string[], { points, closed, pen }: Stroke): void {
  if (points.length === 0) return;
  out.push(
    `${number(pen.width)} w [${pen.dash.map((n) => number(n)).join(' ')}] 0 d ${number(pen.shade)} G\n`
  );
  path(out, points, closed);
  out.push('S\n');
}

function fill(out: string[], { outlines, shade }: Surface): void {
  out.push(`${number(shade)} g\n`);
  for (const outline of outlines) path(out, outline, true);
  out.push('f*\n');
}

function path(out: string[], points: readonly Point[], closed: boolean): void {
  points.forEach((point, i) => out.push(`${number(point.x)} ${number(point.y)} ${i === 0 ? 'm' : 'l'}\n`));
  if (closed) out.push('h\n');
}

/** A number as PDF knows it: no exponent, at most `digits` decimals, no −0. */
function number(value: number, digits = 4): string {
  if (!Number.isFinite(value)) throw new RangeError(`A page can't hold the number ${value}`);
  const text = value.toFixed(digits);
  const short = text.includes('.') ? text.replace(/\.?0+$/, '') : text;
  return short === '-0' ? '0' : short;
}
