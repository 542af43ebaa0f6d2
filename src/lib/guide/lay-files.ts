import { laidWidth } from '$lib/cloth/strip';
import type { Outline, Point } from '$lib/geometry/point';
import { boundingBox } from '$lib/geometry/polygon';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { layPieces, lonePanels, type LaidPiece } from './laid-piece';

/*
 * A kept lay as files beside the guide: SVG at true size, DXF (the lay as a plain drawing, the panels with the layers that sewn-product
 * files commonly have), CSV of the placements. Millimetres throughout; y points up except in SVG.
 */

const round = (v: number): string => String(Math.round(v * 1000) / 1000);
const escaped = (text: string): string => text.replace(/[&<>"']/g, (c) => `&#${c.charCodeAt(0)};`);

/** The lay as SVG at true size: one user unit is a millimetre; the near selvedge is the lower edge of the picture. */
export function laySvg(document: LayDocument, panels: PanelBook, title: string): string {
  const pieces = layPieces(document, panels);
  const width = laidWidth(document.strip);
  const length = document.strip.length ?? Math.max(1, ...pieces.map(({ box }) => box.maxX));
  const at = ({ x, y }: Point) => `${round(x)} ${round(width - y)}`;
  const ring = (outline: Outline) => `M${outline.map(at).join(' L')} Z`;
  const drawn = pieces.map((piece) =>
    [
      `<g data-piece="${piece.number}"><title>${escaped(nameOf(piece))}</title>`,
      `<path class="cut" d="${[piece.cut, ...piece.cutOuts].map(ring).join(' ')}"/>`,
      ...(piece.sew ? [`<path class="sew" d="${ring(piece.sew)}"/>`] : []),
      ...piece.notches.map((notch) => `<path class="notch" d="M${at(notch.edge)} L${at(notch.tip)}"/>`),
      ...piece.drillHoles.map(
        ({ at: hole }) => `<circle class="drill" cx="${round(hole.x)}" cy="${round(width - hole.y)}" r="1"/>`
      ),
      `<path class="grain" d="M${at(piece.grain.from)} L${at(piece.grain.to)}"/>`,
      `<text x="${round(piece.label.x)}" y="${round(width - piece.label.y)}">${escaped(`${piece.number} ${piece.panel}`)}</text></g>`
    ].join('')
  );
  return [
    `<?xml version="1.0" encoding="UTF-8"?>`,
    `<svg xmlns="http://www.w3.org/2000/svg" width="${round(length)}mm" height="${round(width)}mm" viewBox="0 0 ${round(length)} ${round(width)}">`,
    `<title>${escaped(title)}</title>`,
    `<style>path,rect{fill:none;stroke:#23262B;stroke-width:.4}.sew{stroke-dasharray:4 2;stroke-width:.25}.grain{stroke-width:.2}.drill{fill:#23262B}text{font:8px sans-serif;text-anchor:middle}</style>`,
    `<rect class="cloth" width="${round(length)}" height="${round(width)}"/>`,
    ...drawn,
    `</svg>`
  ].join('\n');
}

/** A DXF file of the R12 form from group codes and values. */
class Drawing {
  readonly #lines: string[] = [];
  put(code: number, value: string | number): this {
    this.#lines.push(String(code), typeof value === 'number' ? round(value) : ascii(value));
    return this;
  }
  polyline(layer: string, points: readonly Point[], closed: boolean): this {
    this.put(0, 'POLYLINE')
      .put(8, layer)
      .put(66, '1')
      .put(70, closed ? '1' : '0')
      .put(10, 0)
      .put(20, 0)
      .put(30, 0);
    for (const { x, y } of points) this.put(0, 'VERTEX').put(8, layer).put(10, x).put(20, y).put(30, 0);
    return this.put(0, 'SEQEND').put(8, layer);
  }
  line(layer: string, from: Point, to: Point): this {
    return this.put(0, 'LINE')
      .put(8, layer)
      .put(10, from.x)
      .put(20, from.y)
      .put(30, 0)
      .put(11, to.x)
      .put(21, to.y)
      .put(31, 0);
  }
  point(layer: string, { x, y }: Point): this {
    return this.put(0, 'POINT').put(8, layer).put(10, x).put(20, y).put(30, 0);
  }
  text(layer: string, { x, y }: Point, words: string): this {
    return this.put(0, 'TEXT').put(8, layer).put(10, x).put(20, y).put(30, 0).put(40, 8).put(1, words);
  }
  toString(): string {
    return `${this.#lines.join('\r\n')}\r\n`;
  }
}

/** 7-bit, as the old form asks; other letters are written as their code points. */
const ascii = (text: string): string =>
  [...text.replace(/[\r\n]+/g, ' ')]
    .map((c) =>
      c < ' ' || c > '~' ? `\\U+${c.codePointAt(0)!.toString(16).toUpperCase().padStart(4, '0')}` : c
    )
    .join('');

const head = (drawing: Drawing): Drawing =>
  drawing
    .put(0, 'SECTION')
    .put(2, 'HEADER')
    .put(9, '$ACADVER')
    .put(1, 'AC1009')
    .put(9, '$INSUNITS')
    .put(70, '4')
    .put(0, 'ENDSEC');

/** The lay as a plain drawing: layers CLOTH, CUT, SEW, NOTCH, DRILL, GRAIN, TEXT. */
export function layDxf(document: LayDocument, panels: PanelBook): string {
  const pieces = layPieces(document, panels);
  const width = laidWidth(document.strip);
  const length = document.strip.length ?? Math.max(1, ...pieces.map(({ box }) => box.maxX));
  const drawing = head(new Drawing()).put(0, 'SECTION').put(2, 'ENTITIES');
  drawing.polyline(
    'CLOTH',
    [
      { x: 0, y: 0 },
      { x: length, y: 0 },
      { x: length, y: width },
      { x: 0, y: width }
    ],
    true
  );
  for (const piece of pieces) {
    for (const outline of [piece.cut, ...piece.cutOuts]) drawing.polyline('CUT', outline, true);
    if (piece.sew) drawing.polyline('SEW', piece.sew, true);
    for (const notch of piece.notches) drawing.line('NOTCH', notch.edge, notch.tip);
    for (const { at } of piece.drillHoles) drawing.point('DRILL', at);
    drawing.line('GRAIN', piece.grain.from, piece.grain.to);
    drawing.text('TEXT', piece.label, `${piece.number} ${nameOf(piece)}`);
  }
  return drawing.put(0, 'ENDSEC').put(0, 'EOF').toString();
}

/**
 * The panels, one block each, with the layers that files for sewn products commonly have (ASTM D6673, withdrawn, as commonly stated; conformity
 * is not claimed): 1 boundary, 4 notches, 6 mirror line, 7 grain, 8 internal lines, 11 cut-outs, 13 drill holes, 14 sew lines, 15 text.
 */
export function panelsDxf(document: LayDocument, panels: PanelBook, style: string): string {
  const lone = lonePanels(document, panels);
  const drawing = head(new Drawing()).put(0, 'SECTION').put(2, 'BLOCKS');
  lone.forEach(({ piece, cuts }, k) => {
    const name = `PIECE-${k + 1}`;
    drawing.put(0, 'BLOCK').put(8, '1').put(2, name).put(70, '0').put(10, 0).put(20, 0).put(30, 0);
    drawing.polyline('1', piece.cut, true);
    for (const outline of piece.cutOuts) drawing.polyline('11', outline, true);
    if (piece.sew) drawing.polyline('14', piece.sew, true);
    for (const notch of piece.notches) drawing.point('4', notch.edge);
    for (const { points } of piece.internalLines) drawing.polyline('8', points, false);
    for (const { at } of piece.drillHoles) drawing.point('13', at);
    if (piece.foldLine) drawing.line('6', piece.foldLine.from, piece.foldLine.to);
    drawing.line('7', piece.grain.from, piece.grain.to);
    const count = cuts.reduce((sum, { copies }) => sum + copies, 0);
    [`PIECE NAME: ${piece.panel}`, `QUANTITY: ${count}`].forEach((words, i) =>
      drawing.text('15', { x: piece.label.x, y: piece.label.y - 12 * i }, words)
    );
    drawing.put(0, 'ENDBLK').put(8, '1');
  });
  drawing.put(0, 'ENDSEC').put(0, 'SECTION').put(2, 'ENTITIES');
  drawing.text('1', { x: 0, y: 0 }, `STYLE NAME: ${style}`).text('1', { x: 0, y: -12 }, 'UNITS: METRIC');
  let y = 0;
  lone.forEach(({ piece }, k) => {
    const { minY, maxY } = boundingBox(piece.cut);
    drawing
      .put(0, 'INSERT')
      .put(8, '1')
      .put(2, `PIECE-${k + 1}`)
      .put(10, 0)
      .put(20, y - minY)
      .put(30, 0);
    y += maxY - minY + 50;
  });
  return drawing.put(0, 'ENDSEC').put(0, 'EOF').toString();
}

/** One row a placement; what begins like a formula is disarmed by a leading apostrophe. */
export function placementRows(document: LayDocument, panels: PanelBook): (string | number)[][] {
  return [
    [
      'number',
      'garment',
      'panel',
      'gives',
      'pieces',
      'x mm',
      'y mm',
      'turn degrees',
      'flipped',
      'on the fold'
    ],
    ...layPieces(document, panels).map((piece) => [
      piece.number,
      piece.garment,
      piece.panel,
      piece.hand,
      piece.copies,
      piece.placement.x,
      piece.placement.y,
      piece.placement.turn,
      piece.placement.flip ? 'yes' : 'no',
      piece.onFold ? 'yes' : 'no'
    ])
  ];
}

const nameOf = ({ panel, hand, garment }: LaidPiece): string =>
  `${panel}${hand === 'either' ? '' : ` (${hand})`} of ${garment}`;
