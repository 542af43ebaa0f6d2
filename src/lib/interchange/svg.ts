import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import { arcCurves } from './arcs';
import { assemble } from './assemble';
import { shortText, Tally, type Drawing } from './drawing';
import { Budget, LIMITS, ReadingRefused } from './limits';
import { determinant, IDENTITY, mapPath, mapPoint, multiply, translation, type Matrix } from './matrix';
import { meaningOfName, nameFrom } from './names';
import type { ImportFinding, Meaning, Reading } from './reading';
import { parsePathData, type Subpath } from './svg-path';
import { parseSvgTree, type SvgElement } from './svg-tree';
import {
  MM_PER_PX,
  parseLength,
  parseNumbers,
  parseStyle,
  parseTransform,
  parseViewBox,
  PX_PER,
  userLength,
  viewBoxMatrix
} from './svg-values';

/** What an element inherits from those around it. */
interface Around {
  matrix: Matrix;
  visible: boolean;
  /** The nearest name that says something. */
  name: string;
  group: string;
  layer: string;
  meaning: Meaning;
  viewport: { width: number; height: number };
  /** ids of the `use` elements that led here. */
  uses: readonly string[];
  depth: number;
}

const GROUPS = new Set(['g', 'a', 'switch']);
/** Never drawn where they stand. */
const SILENT = new Set([
  'defs',
  'title',
  'desc',
  'metadata',
  'symbol',
  'marker',
  'pattern',
  'linearGradient',
  'radialGradient',
  'filter',
  'view',
  'cursor'
]);
const CLIPS = new Set(['clipPath', 'mask']);

/**
 * Reads an SVG document (SVG 1.1 and 2: shapes, paths, groups, `use`, transforms, viewBox, units) into outlines in
 * millimetres, y up. Throws ReadingRefused when the file can't be read at all or asks too much.
 */
export function readSvg(text: string): Reading {
  return assemble(drawSvg(text));
}

/** The lines and texts of the document, not yet joined or judged. */
export function drawSvg(text: string): Drawing {
  return new SvgReader(parseSvgTree(text)).read();
}

class SvgReader {
  readonly #root: SvgElement;
  readonly #byId = new Map<string, SvgElement>();
  readonly #budget = new Budget();
  readonly #unsupported = new Tally();
  readonly #hidden = new Tally();
  readonly #findings: ImportFinding[] = [];
  readonly #drawing: Drawing;

  constructor(root: SvgElement) {
    this.#root = root;
    const index = (element: SvgElement): void => {
      const id = element.attributes.get('id');
      if (id !== undefined && !this.#byId.has(id)) this.#byId.set(id, element);
      element.children.forEach(index);
    };
    index(root);
    this.#drawing = {
      format: 'svg',
      title: '',
      units: { known: true, unit: 'px', scale: MM_PER_PX, source: '' },
      strokes: [],
      marks: [],
      texts: [],
      groups: [],
      findings: this.#findings
    };
  }

  read(): Drawing {
    const title = this.#root.children.find((child) => child.name === 'title');
    this.#drawing.title = nameFrom(title?.text);
    const { matrix, viewport } = this.#units();
    this.#children(this.#root, {
      matrix,
      visible: true,
      name: '',
      group: '',
      layer: '',
      meaning: 'plain',
      viewport,
      uses: [],
      depth: 0
    });
    this.#findings.push(
      ...this.#unsupported.findings('unsupported', 'warns', (name, count) =>
        count === 1 ? `One ${name} is not read.` : `${count} times ${name}: not read.`
      ),
      ...this.#hidden.findings('hidden', 'tells', (name, count) =>
        count === 1 ? `One hidden ${name} was left out.` : `${count} hidden ${name} elements were left out.`
      )
    );
    return this.#drawing;
  }

  /** What the numbers of the document mean, and the map from them to millimetres with y up. */
  #units(): { matrix: Matrix; viewport: { width: number; height: number } } {
    const { attributes } = this.#root;
    const viewBox = parseViewBox(attributes.get('viewBox'));
    if (attributes.has('viewBox') && !viewBox)
      this.#warn(
        'bad-viewbox',
        `The viewBox '${shortText(attributes.get('viewBox')!, 40)}' is not one; it was left out.`
      );
    const [width, height] = [parseLength(attributes.get('width')), parseLength(attributes.get('height'))];
    const px = (length: typeof width): number | null => {
      const factor = length && (length.unit === '' ? 1 : PX_PER[length.unit]);
      return length && factor !== undefined && factor !== null && length.value > 0
        ? length.value * factor
        : null;
    };
    let [w, h] = [px(width), px(height)];
    const known = w !== null || h !== null;
    if (viewBox) {
      if (w !== null && h === null) h = (w * viewBox.height) / viewBox.width;
      if (h !== null && w === null) w = (h * viewBox.width) / viewBox.height;
      w ??= viewBox.width;
      h ??= viewBox.height;
    }
    const [W, H] = [w ?? 300, h ?? 150];
    const box = viewBox ?? { x: 0, y: 0, width: W, height: H };
    const toPx = viewBoxMatrix(box, W, H, attributes.get('preserveAspectRatio'));
    const matrix = multiply([MM_PER_PX, 0, 0, -MM_PER_PX, 0, 0], toPx);
    if (!matrix.every(Number.isFinite) || determinant(matrix) === 0)
      throw new ReadingRefused('bad-units', 'The size of the drawing and its viewBox do not give a scale.');
    const unit = (width && px(width) !== null ? width : height)?.unit ?? '';
    const physical = known && unit !== '' && unit !== 'px';
    const scale = Math.sqrt(Math.abs(determinant(matrix)));
    this.#drawing.units = {
      known: physical,
      unit: physical ? unit : 'px',
      scale,
      source: physical
        ? `width="${shortText(attributes.get('width') ?? '', 30)}" height="${shortText(attributes.get('height') ?? '', 30)}" of the document`
        : known
          ? 'the document counts in px; 96 px are one inch'
          : 'the document has no size; 96 units were taken as one inch'
    };
    if (!physical)
      this.#findings.push({
        kind: 'unknown-units',
        severity: 'warns',
        place: null,
        about: null,
        measure: scale,
        message: known
          ? 'The file counts in px. 96 px were taken as one inch, as the standard says; programs differ, so check the scale with a line that you know.'
          : 'The file does not say how large it is. 96 units were taken as one inch: check the scale with a line that you know.'
      });
    return { matrix, viewport: { width: box.width, height: box.height } };
  }

  #warn(kind: string, message: string, place: Point | null = null): void {
    if (this.#findings.length < 500)
      this.#findings.push({ kind, severity: 'warns', place, about: null, measure: null, message });
  }

  #children(element: SvgElement, around: Around): void {
    for (const child of element.children) this.#element(child, around);
  }

  #element(element: SvgElement, outer: Around): void {
    if (!element.ours || SILENT.has(element.name)) return;
    if (outer.depth > LIMITS.depth * 2)
      throw new ReadingRefused('too-deep', `Repeated parts are nested more than ${LIMITS.depth * 2} deep.`);
    const { attributes } = element;
    if (element.name === 'style') {
      if (/display|visibility|transform/i.test(element.text))
        this.#unsupported.add('style sheet rule that hides or moves parts');
      return;
    }
    this.#budget.draw();
    const style = parseStyle(attributes.get('style'));
    if ((style.get('display') ?? attributes.get('display'))?.trim() === 'none') {
      this.#hidden.add(element.name);
      return;
    }
    const visibility = style.get('visibility') ?? attributes.get('visibility');
    const visible =
      visibility === undefined || visibility === 'inherit' ? outer.visible : visibility.trim() === 'visible';
    for (const property of ['transform', 'transform-origin', 'translate', 'rotate', 'scale'])
      if (style.has(property)) this.#unsupported.add(`'${property}' in a style`);
    if (attributes.has('transform-origin')) this.#unsupported.add(`'transform-origin'`);

    let matrix = outer.matrix;
    const written = attributes.get('transform');
    if (written !== undefined && written.trim() !== '' && written.trim() !== 'none') {
      const transform = parseTransform(written);
      if (transform) matrix = multiply(matrix, transform);
      else
        this.#warn(
          'bad-transform',
          `Line ${element.line}: the transform '${shortText(written, 40)}' is not understood; <${element.name}> is where it would be without it.`
        );
    }
    const own = this.#nameOf(element);
    const around: Around = {
      ...outer,
      matrix,
      visible,
      name: own || outer.name,
      depth: outer.depth + 1
    };

    if (GROUPS.has(element.name)) {
      const meaning = meaningOfName(own, false);
      this.#children(element, {
        ...around,
        group: own || outer.group,
        layer: outer.depth === 0 ? own || outer.layer : outer.layer,
        meaning: meaning === 'plain' ? outer.meaning : meaning
      });
    } else if (element.name === 'svg') this.#nestedSvg(element, around);
    else if (element.name === 'use') this.#use(element, around);
    else if (element.name === 'text') this.#text(element, around);
    else if (CLIPS.has(element.name)) return;
    else {
      const shape = this.#shape(element, around);
      if (shape) this.#draw(element, shape, own, around);
      else if (shape === undefined)
        this.#unsupported.add(`<${element.name.slice(0, 40)}>`, this.#at(around, 0, 0));
    }
  }

  #nameOf(element: SvgElement): string {
    const { attributes } = element;
    const title = element.children.find((child) => child.name === 'title');
    return (
      nameFrom(attributes.get('*label')) ||
      nameFrom(title?.text) ||
      nameFrom(attributes.get('data-name')) ||
      nameFrom(attributes.get('aria-label')) ||
      nameFrom(attributes.get('id')) ||
      (attributes.has('class') && meaningOfName(nameFrom(attributes.get('class')), false) !== 'plain'
        ? nameFrom(attributes.get('class'))
        : '')
    );
  }

  #at({ matrix }: Around, x: number, y: number): Point | null {
    const point = mapPoint(matrix, { x, y });
    return Number.isFinite(point.x) && Number.isFinite(point.y) ? point : null;
  }

  #length(element: SvgElement, name: string, around: Around, along: 'x' | 'y' | 'both'): number | null {
    const { width, height } = around.viewport;
    const whole =
      along === 'x' ? width : along === 'y' ? height : Math.sqrt((width * width + height * height) / 2);
    const written = element.attributes.get(name);
    if (written === undefined) return null;
    const length = userLength(written, whole);
    if (length === null || !Number.isFinite(length)) {
      if (written.trim() !== 'auto')
        this.#warn(
          'bad-length',
          `Line ${element.line}: ${name}="${shortText(written, 30)}" of <${element.name}> is not a length that can be read.`
        );
      return null;
    }
    return length;
  }

  #nestedSvg(
    element: SvgElement,
    around: Around,
    size?: { width: number | null; height: number | null }
  ): void {
    const x = this.#length(element, 'x', around, 'x') ?? 0;
    const y = this.#length(element, 'y', around, 'y') ?? 0;
    const width = size?.width ?? this.#length(element, 'width', around, 'x') ?? around.viewport.width;
    const height = size?.height ?? this.#length(element, 'height', around, 'y') ?? around.viewport.height;
    if (!(width > 0) || !(height > 0)) return;
    const viewBox = parseViewBox(element.attributes.get('viewBox'));
    const inner = viewBox
      ? viewBoxMatrix(viewBox, width, height, element.attributes.get('preserveAspectRatio'))
      : IDENTITY;
    this.#children(element, {
      ...around,
      group: around.name || around.group,
      matrix: multiply(
        around.matrix,
        multiply(element.name === 'symbol' ? IDENTITY : translation(x, y), inner)
      ),
      viewport: { width: viewBox?.width ?? width, height: viewBox?.height ?? height }
    });
  }

  #use(element: SvgElement, around: Around): void {
    const href = (element.attributes.get('href') ?? '').trim();
    const id = href.startsWith('#') ? href.slice(1) : null;
    const target = id === null ? undefined : this.#byId.get(id);
    if (id === null || !target) {
      this.#unsupported.add(
        id === null ? '<use> of another file' : `<use> of '${shortText(id, 40)}', which is not there`,
        this.#at(around, 0, 0)
      );
      return;
    }
    if (around.uses.includes(id)) {
      this.#warn(
        'circular-use',
        `Line ${element.line}: <use> of '${shortText(id, 40)}' repeats itself without end; it was left out.`
      );
      return;
    }
    const x = this.#length(element, 'x', around, 'x') ?? 0;
    const y = this.#length(element, 'y', around, 'y') ?? 0;
    const inner: Around = {
      ...around,
      group: around.name || around.group,
      matrix: multiply(around.matrix, translation(x, y)),
      uses: [...around.uses, id]
    };
    if (inner.uses.length > LIMITS.depth)
      throw new ReadingRefused('too-deep', `Repeated parts are nested more than ${LIMITS.depth} deep.`);
    if (target.name === 'symbol' || target.name === 'svg') {
      this.#budget.draw();
      this.#nestedSvg(target, inner, {
        width: this.#length(element, 'width', around, 'x'),
        height: this.#length(element, 'height', around, 'y')
      });
    } else this.#element(target, inner);
  }

  #text(element: SvgElement, around: Around): void {
    const words = shortText(element.text);
    if (words === '' || !around.visible) return;
    const first = element.children.find((child) => child.name === 'tspan' && child.attributes.has('x'));
    const number = (name: string): number => {
      const written = element.attributes.get(name) ?? first?.attributes.get(name);
      return (written === undefined ? undefined : parseNumbers(written)?.[0]) ?? 0;
    };
    const at = this.#at(around, number('x'), number('y'));
    if (at && this.#drawing.texts.length < LIMITS.texts)
      this.#drawing.texts.push({ text: words, at, layer: around.layer, group: around.group });
  }

  /** The subpaths of a shape in user units; null when it draws nothing, undefined when it is no shape that is read. */
  #shape(element: SvgElement, around: Around): Subpath[] | null | undefined {
    const length = (name: string, along: 'x' | 'y' | 'both') => this.#length(element, name, around, along);
    switch (element.name) {
      case 'path': {
        const data = element.attributes.get('d') ?? '';
        const { subpaths, error } = parsePathData(data);
        if (error)
          this.#warn(
            'bad-path',
            `Line ${element.line}: the path ${this.#nameOf(element) ? `'${this.#nameOf(element)}' ` : ''}can't be read further than ${shortText(error, 80)}; what came before was kept.`,
            subpaths[0] ? this.#at(around, subpaths[0].path.from.x, subpaths[0].path.from.y) : null
          );
        return subpaths;
      }
      case 'line': {
        const from = { x: length('x1', 'x') ?? 0, y: length('y1', 'y') ?? 0 };
        const to = { x: length('x2', 'x') ?? 0, y: length('y2', 'y') ?? 0 };
        return [{ path: { from, segments: [{ kind: 'line', to }] }, closed: false }];
      }
      case 'polyline':
      case 'polygon': {
        const written = element.attributes.get('points') ?? '';
        const numbers = parseNumbers(written);
        if (!numbers || numbers.length % 2 !== 0 || !numbers.every(Number.isFinite)) {
          this.#warn(
            'bad-points',
            `Line ${element.line}: the points of <${element.name}> are not pairs of numbers; it was left out.`
          );
          return null;
        }
        const points: Point[] = [];
        for (let i = 0; i + 1 < numbers.length; i += 2) points.push({ x: numbers[i]!, y: numbers[i + 1]! });
        return polyline(points, element.name === 'polygon');
      }
      case 'rect': {
        const [x, y] = [length('x', 'x') ?? 0, length('y', 'y') ?? 0];
        const [w, h] = [length('width', 'x') ?? 0, length('height', 'y') ?? 0];
        if (!(w > 0) || !(h > 0)) return null;
        const [rx, ry] = [length('rx', 'x'), length('ry', 'y')];
        return [roundedRectangle(x, y, w, h, rx ?? ry ?? 0, ry ?? rx ?? 0)];
      }
      case 'circle': {
        const r = length('r', 'both') ?? 0;
        return r > 0 ? [ellipse(length('cx', 'x') ?? 0, length('cy', 'y') ?? 0, r, r)] : null;
      }
      case 'ellipse': {
        const [rx, ry] = [length('rx', 'x'), length('ry', 'y')];
        const [a, b] = [rx ?? ry ?? 0, ry ?? rx ?? 0];
        return a > 0 && b > 0 ? [ellipse(length('cx', 'x') ?? 0, length('cy', 'y') ?? 0, a, b)] : null;
      }
      default:
        return undefined;
    }
  }

  #draw(element: SvgElement, subpaths: Subpath[], own: string, around: Around): void {
    if (!around.visible) {
      this.#hidden.add(element.name);
      return;
    }
    const arrow = ['marker-start', 'marker-end', 'marker'].some((name) => {
      const value = element.attributes.get(name) ?? parseStyle(element.attributes.get('style')).get(name);
      return value !== undefined && value.trim() !== 'none';
    });
    for (const { path, closed } of subpaths) {
      this.#budget.segments(path.segments.length);
      const meaningOfOwn = meaningOfName(own, closed);
      const meaning =
        meaningOfOwn === 'plain'
          ? closed && around.meaning === 'mirror'
            ? 'plain'
            : around.meaning
          : meaningOfOwn;
      const straight = !closed && path.segments.length === 1 && path.segments[0]!.kind === 'line';
      const grain = closed ? null : meaning === 'grain' ? 'name' : arrow && straight ? 'arrow' : null;
      this.#drawing.strokes.push({
        path: mapPath(around.matrix, path),
        closed,
        name: own || around.name,
        layer: around.layer,
        group: around.group,
        meaning: grain ? 'grain' : meaning === 'grain' ? 'plain' : meaning,
        grain
      });
    }
  }
}

function polyline(points: readonly Point[], closed: boolean): Subpath[] | null {
  const [from, ...rest] = points;
  if (!from || rest.length === 0) return null;
  return [{ path: { from, segments: rest.map((to): Segment => ({ kind: 'line', to })) }, closed }];
}

function ellipse(cx: number, cy: number, rx: number, ry: number): Subpath {
  const path: Path = arcCurves([rx, 0, 0, ry, cx, cy], 0, 2 * Math.PI, Math.max(rx, ry));
  return { path, closed: true };
}

/** A rectangle, its corners rounded by quarter ellipses no larger than half a side (SVG 2, 10.2). */
function roundedRectangle(x: number, y: number, w: number, h: number, rx: number, ry: number): Subpath {
  const a = Math.min(Math.max(rx, 0), w / 2);
  const b = Math.min(Math.max(ry, 0), h / 2);
  if (a === 0 || b === 0) {
    const corners = [
      { x: x + w, y },
      { x: x + w, y: y + h },
      { x, y: y + h }
    ];
    return {
      path: { from: { x, y }, segments: corners.map((to): Segment => ({ kind: 'line', to })) },
      closed: true
    };
  }
  const segments: Segment[] = [];
  const side = (to: Point, centre: Point, start: number): void => {
    segments.push({ kind: 'line', to });
    segments.push(
      ...arcCurves([a, 0, 0, b, centre.x, centre.y], start, Math.PI / 2, Math.max(a, b)).segments
    );
  };
  side({ x: x + w - a, y }, { x: x + w - a, y: y + b }, -Math.PI / 2);
  side({ x: x + w, y: y + h - b }, { x: x + w - a, y: y + h - b }, 0);
  side({ x: x + a, y: y + h }, { x: x + a, y: y + h - b }, Math.PI / 2);
  side({ x, y: y + b }, { x: x + a, y: y + b }, Math.PI);
  return { path: { from: { x: x + a, y }, segments }, closed: true };
}
