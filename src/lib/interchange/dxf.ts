import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import { arcCurves } from './arcs';
import { assemble } from './assemble';
import { shortText, Tally, type Drawing, type Stroke } from './drawing';
import { bulgeSegments, splinePath } from './dxf-curves';
import {
  numberOf,
  parseDxfFile,
  textOf,
  toNumber,
  type DxfBlock,
  type DxfEntity,
  type DxfFile
} from './dxf-file';
import { drawingUnits } from './dxf-units';
import { Budget, LIMITS, ReadingRefused } from './limits';
import { mapPath, mapPoint, multiply, rotation, scaling, translation, type Matrix } from './matrix';
import { meaningOfName, nameFrom } from './names';
import type { Meaning, Reading } from './reading';

/**
 * The layers of the open standard for sewn-product pattern data, as commonly stated of it; not checked against its
 * text, conformity is not claimed. Its point layers (2, 3) and text layer (15) are read apart.
 */
const PATTERN_LAYERS: Readonly<Record<string, Meaning>> = {
  '1': 'boundary',
  '4': 'notch',
  '5': 'reference',
  '6': 'mirror',
  '7': 'grain',
  '8': 'internal',
  '9': 'reference',
  '10': 'reference',
  '11': 'cutOut',
  '13': 'drill',
  '14': 'sew',
  '80': 'notch',
  '81': 'notch',
  '82': 'notch',
  '83': 'notch',
  '84': 'reference',
  '85': 'reference',
  '86': 'reference',
  '87': 'reference'
};

const PIECE_FIELDS = new Set([
  'PIECE NAME',
  'SIZE',
  'QUANTITY',
  'CATEGORY',
  'MATERIAL',
  'ANNOTATION',
  'STYLE NAME',
  'SAMPLE SIZE',
  'UNITS',
  'AUTHOR',
  'PRODUCT',
  'VERSION',
  'CREATION DATE',
  'CREATION TIME',
  'GRADING RULE TABLE',
  'GRADE RULE TABLE'
]);

/** Read elsewhere, or of no meaning for an outline. */
const SILENT = new Set(['VIEWPORT', 'SEQEND', 'ENDBLK', 'ATTDEF']);

/**
 * Reads an ASCII DXF file (release 12 and later) into outlines in millimetres, y up, with the layer meanings of
 * pattern files where the file is one. Throws ReadingRefused when it can't be read at all or asks too much.
 */
export function readDxf(text: string): Reading {
  return assemble(drawDxf(text));
}

/** The lines and texts of the file, not yet joined or judged. */
export function drawDxf(text: string): Drawing {
  return new DxfReader(parseDxfFile(text)).read();
}

interface Around {
  matrix: Matrix;
  /** What layer 0 of a block stands for. */
  layer: string;
  block: string;
  inserts: readonly string[];
}

class DxfReader {
  readonly #file: DxfFile;
  readonly #budget = new Budget();
  readonly #unsupported = new Tally();
  readonly #broken = new Tally();
  readonly #hidden = new Tally();
  readonly #repeated = new Tally();
  readonly #approximated = new Tally();
  readonly #drawing: Drawing;
  readonly #pattern: boolean;
  readonly #readOnce = new Set<string>();

  constructor(file: DxfFile) {
    this.#file = file;
    const texts = [...file.blocks.values()].flatMap(({ entities }) => entities).concat(file.entities);
    const fields = texts.map(fieldOf).filter((field) => field !== null);
    this.#pattern =
      fields.some(([key]) => key === 'PIECE NAME' || key === 'STYLE NAME') ||
      [...file.blocks.values()].some(({ entities }) =>
        entities.some((entity) => /POLYLINE$/.test(entity.type) && textOf(entity, 8) === '1')
      );
    const { units, findings } = drawingUnits(
      file.header,
      fields.find(([key]) => key === 'UNITS')?.[1] ?? null
    );
    this.#drawing = {
      format: 'dxf',
      title: shortText(fields.find(([key]) => key === 'STYLE NAME')?.[1] ?? '', 80),
      units,
      strokes: [],
      marks: [],
      texts: [],
      groups: [],
      findings
    };
  }

  read(): Drawing {
    const matrix = scaling(this.#drawing.units.scale);
    this.#entities(this.#file.entities, { matrix, layer: '0', block: '', inserts: [] });
    // Pattern files may define their pieces as blocks without ever inserting them.
    if (this.#pattern)
      for (const block of this.#file.blocks.values())
        if (!this.#readOnce.has(block.name) && !block.name.startsWith('*') && holdsBoundary(block))
          this.#block(block, { matrix, layer: '0', block: block.name, inserts: [block.name] });
    this.#drawing.findings.push(
      ...this.#unsupported.findings('unsupported', 'warns', (name, count) =>
        count === 1 ? `One ${name} is not read.` : `${count} times ${name}: not read.`
      ),
      ...this.#broken.findings('bad-entity', 'warns', (name, count) =>
        count === 1 ? `One ${name}; left out.` : `${count} times ${name}; left out.`
      ),
      ...this.#approximated.findings('approximated', 'tells', (name, count) =>
        count === 1
          ? `One ${name} was approximated by cubic curves.`
          : `${count} times ${name}: approximated by cubic curves.`
      ),
      ...this.#repeated.findings(
        'repeated-block',
        'tells',
        (name, count) => `The panel '${name}' stands ${count + 1} times in the drawing; it was read once.`
      ),
      ...this.#hidden.findings('hidden', 'tells', (name, count) =>
        count === 1 ? `One ${name} was left out.` : `${count} times ${name}: left out.`
      )
    );
    return this.#drawing;
  }

  #entities(entities: readonly DxfEntity[], around: Around): void {
    for (const entity of entities) this.#entity(entity, around);
  }

  #entity(entity: DxfEntity, around: Around): void {
    if (SILENT.has(entity.type)) return;
    this.#budget.draw();
    const own = textOf(entity, 8) ?? '0';
    const layer = own === '0' ? around.layer : own;
    if (numberOf(entity, 67, 0) === 1) return this.#hidden.add('entity of a paper page');
    if (numberOf(entity, 60, 0) === 1) return this.#hidden.add('hidden entity');
    if (this.#file.hiddenLayers.has(layer))
      return this.#hidden.add(`entity on the hidden layer ${shortText(layer, 40)}`);
    const ocs = objectPlane(entity);
    if (!ocs) return this.#unsupported.add(`${entity.type} that stands aslant in space`);
    const placed: Around = { ...around, matrix: multiply(around.matrix, ocs), layer };
    switch (entity.type) {
      case 'LINE':
        return this.#line(entity, { ...placed, matrix: around.matrix });
      case 'POINT':
        return this.#point(entity, { ...placed, matrix: around.matrix });
      case 'LWPOLYLINE':
      case 'POLYLINE':
        return this.#polyline(entity, placed);
      case 'ARC':
      case 'CIRCLE':
        return this.#circle(entity, placed);
      case 'ELLIPSE':
        return this.#ellipse(entity, { ...placed, matrix: around.matrix });
      case 'SPLINE':
        return this.#spline(entity, { ...placed, matrix: around.matrix });
      case 'TEXT':
      case 'MTEXT':
      case 'ATTRIB':
        return this.#text(entity, entity.type === 'MTEXT' ? { ...placed, matrix: around.matrix } : placed);
      case 'INSERT':
        this.#insert(entity, placed);
        return this.#entities(entity.children, around);
      default:
        return this.#unsupported.add(shortText(entity.type, 40) || 'entity without a type');
    }
  }

  /** Whether every number is one; otherwise the entity is counted as broken. */
  #sound(entity: DxfEntity, numbers: readonly number[]): boolean {
    if (numbers.every(Number.isFinite)) return true;
    this.#broken.add(`${entity.type} with a missing or broken number`);
    return false;
  }

  #draw(path: Path, closed: boolean, { matrix, layer, block }: Around): void {
    if (path.segments.length === 0) return;
    this.#budget.segments(path.segments.length);
    const meaning = this.#meaning(layer, closed);
    const straight = !closed && path.segments.length === 1;
    this.#drawing.strokes.push({
      path: mapPath(matrix, path),
      closed,
      name: this.#pattern ? nameFrom(block) : nameFrom(block) || (/^\d*$/.test(layer) ? '' : nameFrom(layer)),
      layer,
      group: block,
      meaning: meaning === 'grain' && !straight ? 'plain' : meaning,
      grain: meaning === 'grain' && straight ? (this.#pattern && layer === '7' ? 'layer' : 'name') : null
    } satisfies Stroke);
  }

  #meaning(layer: string, closed: boolean): Meaning {
    const byNumber = this.#pattern ? PATTERN_LAYERS[layer] : undefined;
    return byNumber ?? meaningOfName(nameFrom(layer), closed);
  }

  #line(entity: DxfEntity, around: Around): void {
    const n = [10, 20, 11, 21].map((code) => numberOf(entity, code, NaN));
    if (!this.#sound(entity, n)) return;
    this.#draw(
      { from: { x: n[0]!, y: n[1]! }, segments: [{ kind: 'line', to: { x: n[2]!, y: n[3]! } }] },
      false,
      around
    );
  }

  #point(entity: DxfEntity, around: Around): void {
    const [x, y] = [numberOf(entity, 10, NaN), numberOf(entity, 20, NaN)];
    if (!this.#sound(entity, [x, y])) return;
    const { layer, block } = around;
    const kind =
      this.#pattern && layer === '2'
        ? 'turn'
        : ({ notch: 'notch', drill: 'drill' } as const)[this.#meaning(layer, false) as 'notch' | 'drill'];
    if (kind)
      this.#drawing.marks.push({
        at: mapPoint(around.matrix, { x, y }),
        layer,
        group: block,
        kind,
        note: ''
      });
    // Curve points and grade points of pattern files say nothing that the lines don't.
    else if (!this.#pattern) this.#unsupported.add('POINT');
  }

  #polyline(entity: DxfEntity, around: Around): void {
    const flags = numberOf(entity, 70, 0);
    if (entity.type === 'POLYLINE' && (flags & (16 | 64)) !== 0)
      return this.#unsupported.add('POLYLINE that is a mesh');
    const vertices: { at: Point; bulge: number }[] =
      entity.type === 'POLYLINE'
        ? entity.children
            // The frame of a fitted curve is not drawn.
            .filter((vertex) => (numberOf(vertex, 70, 0) & 16) === 0)
            .map((vertex) => ({
              at: { x: numberOf(vertex, 10, NaN), y: numberOf(vertex, 20, NaN) },
              bulge: numberOf(vertex, 42, 0)
            }))
        : lightVertices(entity);
    if (
      !this.#sound(
        entity,
        vertices.flatMap(({ at, bulge }) => [at.x, at.y, bulge])
      )
    )
      return;
    if (vertices.length < 2) return this.#broken.add(`${entity.type} with fewer than two points`);
    const closed = (flags & 1) === 1;
    const segments: Segment[] = [];
    for (let i = 1; i < vertices.length; i += 1)
      segments.push(...bulgeSegments(vertices[i - 1]!.at, vertices[i]!.at, vertices[i - 1]!.bulge));
    const [first, last] = [vertices[0]!, vertices[vertices.length - 1]!];
    if (closed) segments.push(...bulgeSegments(last.at, first.at, last.bulge));
    const is3d = entity.type === 'POLYLINE' && (flags & 8) !== 0;
    this.#draw(
      { from: first.at, segments },
      closed,
      is3d ? { ...around, matrix: this.#flat(around, entity) } : around
    );
  }

  /** A 3D polyline gives world coordinates, whatever its plane says. */
  #flat(around: Around, entity: DxfEntity): Matrix {
    const plane = objectPlane(entity);
    return plane && plane[0] === -1 ? multiply(around.matrix, [-1, 0, 0, 1, 0, 0]) : around.matrix;
  }

  #circle(entity: DxfEntity, around: Around): void {
    const [x, y, r] = [10, 20, 40].map((code) => numberOf(entity, code, NaN)) as [number, number, number];
    const whole = entity.type === 'CIRCLE';
    const [from, to] = whole ? [0, 360] : [numberOf(entity, 50, NaN), numberOf(entity, 51, NaN)];
    if (!this.#sound(entity, [x, y, r, from, to])) return;
    if (!(r > 0)) return this.#broken.add(`${entity.type} without a radius`);
    const sweep = whole ? 360 : (((to - from) % 360) + 360) % 360 || 360;
    this.#draw(
      arcCurves([r, 0, 0, r, x, y], (from * Math.PI) / 180, (sweep * Math.PI) / 180, r),
      whole,
      around
    );
  }

  #ellipse(entity: DxfEntity, around: Around): void {
    const [x, y, ax, ay, ratio] = [10, 20, 11, 21, 40].map((code) => numberOf(entity, code, NaN)) as [
      number,
      number,
      number,
      number,
      number
    ];
    const [start, end] = [numberOf(entity, 41, 0), numberOf(entity, 42, 2 * Math.PI)];
    if (!this.#sound(entity, [x, y, ax, ay, ratio, start, end])) return;
    const major = Math.hypot(ax, ay);
    if (!(major > 0) || !(ratio > 0)) return this.#broken.add('ELLIPSE without an axis');
    // The minor axis is the normal × the major axis: it turns the other way when the normal points down.
    const side = numberOf(entity, 230, 1) < 0 ? -1 : 1;
    let sweep = (((end - start) % (2 * Math.PI)) + 2 * Math.PI) % (2 * Math.PI);
    const whole = sweep < 1e-9 || 2 * Math.PI - sweep < 1e-9;
    if (whole) sweep = 2 * Math.PI;
    const matrix: Matrix = [ax, ay, -ay * ratio * side, ax * ratio * side, x, y];
    this.#draw(arcCurves(matrix, start, sweep, Math.max(major, major * ratio)), whole, around);
  }

  #spline(entity: DxfEntity, around: Around): void {
    const numbers = (code: number): number[] =>
      entity.codes.filter(([c]) => c === code).map(([, value]) => toNumber(value));
    const [xs, ys] = [numbers(10), numbers(20)];
    if (xs.length === 0) return this.#unsupported.add('SPLINE without control points');
    if (xs.length !== ys.length || xs.length > LIMITS.outlineSegments)
      return this.#broken.add('SPLINE whose control points do not fit');
    const spline = {
      degree: numberOf(entity, 71, 3),
      knots: numbers(40),
      weights: numbers(41),
      controls: xs.map((x, i) => ({ x, y: ys[i]! }))
    };
    if (!this.#sound(entity, [...xs, ...ys, ...spline.knots, ...spline.weights, spline.degree])) return;
    const found = splinePath(spline);
    if (!found) return this.#broken.add('SPLINE whose knots and control points do not fit');
    if (!found.exact)
      this.#approximated.add(
        `SPLINE of degree ${spline.degree}${spline.weights.length > 0 ? ' with weights' : ''}`
      );
    this.#draw(found.path, (numberOf(entity, 70, 0) & 1) === 1, around);
  }

  #text(entity: DxfEntity, around: Around): void {
    const words = plainText(entity);
    if (words === '') return;
    const field = fieldOf(entity);
    if (field && around.block !== '') {
      const group = this.#group(around.block);
      group.fields[field[0]] ??= shortText(field[1]);
    }
    const [x, y] = [numberOf(entity, 10, 0), numberOf(entity, 20, 0)];
    if (!this.#sound(entity, [x, y])) return;
    // '# n' beside a point is a grade rule.
    if (this.#pattern && /^#\s*\d+$/.test(words)) return;
    if (field && PIECE_FIELDS.has(field[0])) return;
    if (this.#drawing.texts.length < LIMITS.texts)
      this.#drawing.texts.push({
        text: shortText(words),
        at: mapPoint(around.matrix, { x, y }),
        layer: around.layer,
        group: around.block
      });
  }

  #group(name: string): { name: string; fields: Record<string, string> } {
    const short = shortText(name, 80);
    let group = this.#drawing.groups.find((known) => known.name === short);
    if (!group) {
      group = { name: short, fields: {} };
      this.#drawing.groups.push(group);
    }
    return group;
  }

  #insert(entity: DxfEntity, around: Around): void {
    const name = textOf(entity, 2) ?? '';
    const block = this.#file.blocks.get(name);
    if (!block) return this.#unsupported.add(`INSERT of '${shortText(name, 40)}', which is not in the file`);
    if (around.inserts.includes(name))
      return this.#broken.add(`INSERT of '${shortText(name, 40)}' inside itself`);
    if (around.inserts.length >= LIMITS.insertDepth)
      throw new ReadingRefused(
        'too-deep',
        `Blocks are nested more than ${LIMITS.insertDepth} deep. Explode them and upload the file again.`
      );
    const [x, y, turn] = [numberOf(entity, 10, 0), numberOf(entity, 20, 0), numberOf(entity, 50, 0)];
    const [sx, sy] = [numberOf(entity, 41, 1), numberOf(entity, 42, 1)];
    const [columns, rows] = [numberOf(entity, 70, 1), numberOf(entity, 71, 1)];
    const [across, up] = [numberOf(entity, 44, 0), numberOf(entity, 45, 0)];
    if (!this.#sound(entity, [x, y, turn, sx, sy, columns, rows, across, up])) return;
    const panel = this.#pattern && holdsBoundary(block);
    if (panel && this.#readOnce.has(name)) return this.#repeated.add(shortText(name, 40));
    this.#readOnce.add(name);
    const [m, n] = [Math.max(1, Math.floor(columns)), Math.max(1, Math.floor(rows))];
    if (m * n > LIMITS.drawn)
      throw new ReadingRefused(
        'too-much-drawn',
        `An INSERT repeats its block ${m} × ${n} times; ${LIMITS.drawn.toLocaleString('en')} things may be drawn in all.`
      );
    const place = multiply(multiply(around.matrix, translation(x, y)), rotation(turn));
    for (let column = 0; column < (panel ? 1 : m); column += 1)
      for (let row = 0; row < (panel ? 1 : n); row += 1) {
        this.#budget.draw();
        this.#block(block, {
          matrix: multiply(multiply(place, translation(column * across, row * up)), scaling(sx, sy)),
          layer: around.layer,
          block: around.block === '' || panel ? name : around.block,
          inserts: [...around.inserts, name]
        });
      }
    if (panel && m * n > 1) this.#repeated.add(shortText(name, 40));
  }

  #block(block: DxfBlock, around: Around): void {
    const [x, y] = [numberOf(block, 10, 0), numberOf(block, 20, 0)];
    if (!Number.isFinite(x) || !Number.isFinite(y)) return this.#broken.add('BLOCK with a broken base point');
    if (around.block === block.name && this.#pattern) this.#group(block.name);
    this.#entities(block.entities, { ...around, matrix: multiply(around.matrix, translation(-x, -y)) });
  }
}

function holdsBoundary({ entities }: DxfBlock): boolean {
  return entities.some((entity) => textOf(entity, 8) === '1' && entity.type !== 'TEXT');
}

/**
 * The map from an entity's own plane to the world: the extrusion direction through the arbitrary axis rule of the
 * format. Only planes that face straight up (nothing to do) or straight down (x is mirrored) are drawings.
 */
function objectPlane(entity: DxfEntity): Matrix | null {
  const [x, y, z] = [numberOf(entity, 210, 0), numberOf(entity, 220, 0), numberOf(entity, 230, 1)];
  const length = Math.hypot(x, y, z);
  if (!(length > 0)) return null;
  if (Math.hypot(x, y) / length > 1e-6) return null;
  return z > 0 ? [1, 0, 0, 1, 0, 0] : [-1, 0, 0, 1, 0, 0];
}

/** The vertices of an LWPOLYLINE: every 10 starts one, 20 and 42 belong to the last. */
function lightVertices(entity: DxfEntity): { at: Point; bulge: number }[] {
  const vertices: { at: { x: number; y: number }; bulge: number }[] = [];
  for (const [code, value] of entity.codes) {
    const last = vertices[vertices.length - 1];
    if (code === 10) vertices.push({ at: { x: toNumber(value), y: NaN }, bulge: 0 });
    else if (code === 20 && last) last.at.y = toNumber(value);
    else if (code === 42 && last) last.bulge = toNumber(value);
  }
  return vertices;
}

/** The words of a TEXT, MTEXT or ATTRIB without formatting codes. */
function plainText(entity: DxfEntity): string {
  const written =
    entity.type === 'MTEXT'
      ? entity.codes
          .filter(([code]) => code === 3 || code === 1)
          .map(([, value]) => value)
          .join('')
          .replace(/\\P/g, ' ')
          .replace(/\\[ACcFfHhLlOoKkQqTtWwp][^;\\{}]{0,100};?/g, '')
          .replace(/[{}]/g, '')
      : (textOf(entity, 1) ?? '');
  return written
    .replace(/\\U\+([0-9A-Fa-f]{4})/g, (_, hex: string) => String.fromCharCode(parseInt(hex, 16)))
    .replace(/%%[dD]/g, '°')
    .replace(/%%[cC]/g, 'Ø')
    .replace(/%%[pP]/g, '±')
    .replace(/%%[uUoO]/g, '')
    .trim();
}

/** 'KEYWORD: value' of a text, keyword in capitals; null when it is another text. */
function fieldOf(entity: DxfEntity): [string, string] | null {
  if (entity.type !== 'TEXT' && entity.type !== 'MTEXT' && entity.type !== 'ATTRIB') return null;
  const match = /^\s*([A-Za-z][A-Za-z ]{1,30}?)\s*:\s*(.*)$/.exec(plainText(entity));
  if (!match) return null;
  const key = match[1]!.toUpperCase();
  return PIECE_FIELDS.has(key) ? [key, match[2]!] : null;
}
