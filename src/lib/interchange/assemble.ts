import type { Point } from '$lib/geometry/point';
import { findArrows } from './arrows';
import { clean, pathMiddle, points } from './clean-path';
import { closeStrokes, type Closed } from './closing';
import { selfContact } from './crossings';
import { shortText, type Drawing, type DrawnText, type Find, type Stroke } from './drawing';
import { LIMITS, ReadingRefused } from './limits';
import { nest, ring, sameShape, smallestAround, smallestNear, type Shape } from './nesting';
import { cuttingWords, SAYS_NOTHING } from './names';
import { boxOf, endOf, nearestOnPolyline, pathBox, pathLength, reversed, signedArea } from './path-measure';
import {
  READING_SCHEMA,
  type ImportFinding,
  type ReadGrain,
  type Reading,
  type ReadLine,
  type ReadOutline
} from './reading';

/** No cloth is wider than this on its narrow side, or longer on its long one (common practice, no published source). */
const WIDEST_CLOTH = 3_300;
const LONGEST_CLOTH = 50_000;
/** An outline thinner than this on average holds no cloth. */
const THINNEST = 0.02;

/** What a drawing comes to: outlines closed, joined, nested and judged, marks and texts given to them. */
export function assemble(drawing: Drawing): Reading {
  return new Assembly(drawing).reading();
}

class Assembly {
  readonly #drawing: Drawing;
  readonly #findings: ImportFinding[];

  constructor(drawing: Drawing) {
    this.#drawing = drawing;
    this.#findings = drawing.findings;
  }

  readonly #find: Find = (kind, severity, message, place = null, about = null, measure = null) => {
    if (this.#findings.length < 1000) this.#findings.push({ kind, severity, place, about, measure, message });
  };

  reading(): Reading {
    const strokes = findArrows(this.#cleanStrokes());
    const { closed, open } = closeStrokes(strokes, this.#find);
    const shapes = this.#outlines(closed);
    const lines = this.#lines(open, shapes);
    const grains = lines
      .filter(({ meaning }) => meaning === 'grain')
      .map((line): ReadGrain => ({
        id: line.id.replace('l', 'g'),
        from: line.path.from,
        to: endOf(line.path),
        outline: line.outline,
        source: line.grain ?? 'name'
      }));
    const outlineAt = (at: Point, group: string): string | null => this.#outlineAt(at, group, shapes);
    const marks = this.#drawing.marks.map((mark, i) => ({ ...mark, id: `m${i + 1}` }));
    const notches = marks
      .filter(({ kind }) => kind === 'notch')
      .map(({ id, at, group, note }) => ({ id, at, note, outline: outlineAt(at, group) }));
    for (const line of lines)
      if (line.meaning === 'notch')
        notches.push({ id: line.id, at: line.path.from, note: line.name, outline: line.outline });
    const drillHoles = marks
      .filter(({ kind }) => kind === 'drill')
      .map(({ id, at, group, note }) => ({ id, at, note, outline: outlineAt(at, group) }));
    for (const mark of marks)
      if (mark.kind === 'turn') {
        const outline = shapes.find(
          (shape) =>
            shape.outline.group === mark.group &&
            nearestOnPolyline(mark.at, [...shape.polygon, shape.polygon[0]!]).distance <= 0.5
        );
        outline?.outline.turnPoints.push(mark.at);
      }
    const texts = this.#texts(shapes);
    const outlines = shapes.map(({ outline }) => outline);
    if (!outlines.some(({ offered }) => offered))
      this.#find(
        'no-outline',
        'stops',
        open.length > 0
          ? 'The file has lines but no closed outline that could be a panel.'
          : 'The file draws nothing that could be a panel.'
      );
    return {
      schema: READING_SCHEMA,
      format: this.#drawing.format,
      title: this.#drawing.title,
      units: this.#drawing.units,
      outlines,
      openLines: lines
        .filter(
          ({ meaning }) =>
            meaning === 'plain' ||
            meaning === 'internal' ||
            meaning === 'reference' ||
            meaning === 'sew' ||
            meaning === 'boundary' ||
            meaning === 'cutOut' ||
            meaning === 'drill'
        )
        .map(bare),
      grains,
      notches,
      drillHoles,
      mirrorLines: lines.filter(({ meaning }) => meaning === 'mirror').map(bare),
      texts,
      groups: this.#drawing.groups,
      findings: this.#findings
    };
  }

  #cleanStrokes(): Stroke[] {
    const kept: Stroke[] = [];
    let far = 0;
    for (const stroke of this.#drawing.strokes) {
      if (
        points(stroke.path).some(
          ({ x, y }) => !(Math.abs(x) <= LIMITS.coordinate && Math.abs(y) <= LIMITS.coordinate)
        )
      ) {
        far += 1;
        continue;
      }
      const path = clean(stroke.path);
      if (path) kept.push({ ...stroke, path, name: shortText(stroke.name, 80) });
    }
    if (far > 0)
      this.#find(
        'too-far',
        'warns',
        `${far} ${far === 1 ? 'line lies' : 'lines lie'} more than a kilometre from the origin or ${far === 1 ? 'has' : 'have'} no number for a place; left out.`,
        null,
        null,
        far
      );
    return kept;
  }

  #outlines(closed: readonly Closed[]): Shape[] {
    const patternFile = closed.some(({ stroke }) => stroke.meaning === 'boundary');
    const kept: Shape[] = [];
    for (const { stroke, path, gap } of closed) {
      if (stroke.meaning === 'reference') continue;
      const id = `o${kept.length + 1}`;
      const called = stroke.name === '' ? 'An outline' : `'${stroke.name}'`;
      if (path.segments.length > LIMITS.outlineSegments) {
        this.#find(
          'too-many-segments',
          'stops',
          `${called} has ${path.segments.length} lines and curves; ${LIMITS.outlineSegments} are allowed. It was left out.`,
          path.from,
          null,
          path.segments.length
        );
        continue;
      }
      const area = signedArea(path);
      const polygon = ring(path);
      const contact = selfContact(polygon);
      if (
        contact.kind !== 'crosses' &&
        contact.kind !== 'tangled' &&
        Math.abs(area) < THINNEST * pathLength(path) * 0.5
      ) {
        this.#find(
          'zero-area',
          'warns',
          `${called} encloses no area; it was left out.`,
          path.from,
          null,
          Math.abs(area)
        );
        continue;
      }
      if (stroke.meaning === 'drill' || (stroke.meaning === 'notch' && Math.abs(area) < 400)) {
        const box = boxOf(polygon);
        this.#drawing.marks.push({
          at: { x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 },
          layer: stroke.layer,
          group: stroke.group,
          kind: stroke.meaning,
          note: ''
        });
        continue;
      }
      if (kept.length >= LIMITS.outlines)
        throw new ReadingRefused(
          'too-many-outlines',
          `The file has more than ${LIMITS.outlines} closed outlines. Upload the panels in several files.`
        );
      const forward = area < 0 ? reversed(path) : path;
      const outline: ReadOutline = {
        id,
        name: stroke.name,
        path: forward,
        box: pathBox(forward),
        area: Math.abs(area),
        inside: null,
        layer: shortText(stroke.layer, 80),
        group: shortText(stroke.group, 80),
        meaning: stroke.meaning,
        gap,
        turnPoints: [],
        offered: contact.kind === 'clear' || contact.kind === 'touches',
        says: { ...SAYS_NOTHING }
      };
      const size = [outline.box.maxX - outline.box.minX, outline.box.maxY - outline.box.minY].sort(
        (a, b) => a - b
      );
      if (size[0]! > WIDEST_CLOTH || size[1]! > LONGEST_CLOTH)
        this.#find(
          'too-large',
          'warns',
          `${called} is ${(size[1]! / 10).toFixed(0)} × ${(size[0]! / 10).toFixed(0)} cm, larger than any cloth. Check the scale.`,
          forward.from,
          id,
          size[1]!
        );
      if (gap > 0)
        this.#find(
          'not-closed',
          'warns',
          `${called} is not closed: its ends are ${gap.toFixed(2)} mm apart. If you use it, a straight line closes it.`,
          forward.from,
          id,
          gap
        );
      if (contact.kind === 'crosses')
        this.#find(
          'crosses-itself',
          'stops',
          `${called} crosses itself. Mend it in the drawing and upload it again.`,
          contact.at,
          id
        );
      if (contact.kind === 'tangled')
        this.#find(
          'crosses-itself',
          'stops',
          `${called} is too tangled to be judged. Mend it in the drawing and upload it again.`,
          forward.from,
          id
        );
      if (contact.kind === 'touches')
        this.#find('touches-itself', 'warns', `${called} touches itself without crossing.`, contact.at, id);
      kept.push({ outline, polygon });
    }
    this.#duplicates(kept);
    const nested = nest(kept.map(({ outline }) => outline));
    nested.forEach((outline, i) => {
      kept[i]!.outline = {
        ...outline,
        offered:
          outline.offered &&
          outline.inside === null &&
          (patternFile ? outline.meaning === 'boundary' : outline.meaning !== 'sew')
      };
    });
    // A sew line that no cut line surrounds is an outline like any other.
    for (const shape of kept)
      if (!patternFile && shape.outline.meaning === 'sew' && shape.outline.inside === null)
        shape.outline.offered = !this.#findings.some(
          ({ about, kind }) => about === shape.outline.id && kind === 'crosses-itself'
        );
    return kept;
  }

  /** The same outline drawn twice on one place: the later one is not kept. */
  #duplicates(shapes: Shape[]): void {
    const key = ({ outline: { box } }: Shape, dx: number): string => `${Math.floor(box.minX) + dx}`;
    const seen = new Map<string, Shape[]>();
    for (let i = 0; i < shapes.length; i += 1) {
      const shape = shapes[i]!;
      const twin = [-1, 0, 1]
        .flatMap((dx) => seen.get(key(shape, dx)) ?? [])
        .find((other) => sameShape(other, shape));
      if (twin) {
        const name = shape.outline.name || twin.outline.name;
        this.#find(
          'duplicate',
          'warns',
          `${name === '' ? 'An outline' : `'${name}'`} is drawn twice on the same place; the second one was left out.`,
          shape.outline.path.from,
          twin.outline.id
        );
        if (twin.outline.name === '') twin.outline.name = shape.outline.name;
        shapes.splice(i, 1);
        i -= 1;
      } else {
        const list = seen.get(key(shape, 0));
        if (list) list.push(shape);
        else seen.set(key(shape, 0), [shape]);
      }
    }
  }

  #outlineAt(at: Point, group: string, shapes: readonly Shape[]): string | null {
    const mine = group === '' ? [] : shapes.filter(({ outline }) => outline.group === group);
    return (
      (
        smallestAround(
          at,
          mine.filter(({ outline }) => outline.offered)
        ) ??
        smallestAround(
          at,
          shapes.filter(({ outline }) => outline.offered)
        ) ??
        (mine.filter(({ outline }) => outline.offered).length === 1
          ? mine.find(({ outline }) => outline.offered)!
          : null) ??
        smallestNear(at, shapes)
      )?.outline.id ?? null
    );
  }

  #lines(open: readonly Stroke[], shapes: readonly Shape[]): (ReadLine & { grain: Stroke['grain'] })[] {
    return open.map((stroke, i) => ({
      id: `l${i + 1}`,
      name: stroke.name,
      path: stroke.path,
      layer: shortText(stroke.layer, 80),
      group: shortText(stroke.group, 80),
      meaning: stroke.meaning,
      outline: this.#outlineAt(pathMiddle(stroke.path), stroke.group, shapes),
      grain: stroke.grain
    }));
  }

  /** Gives texts to outlines: a name for those without one, and what they say of cutting. */
  #texts(shapes: readonly Shape[]): Reading['texts'] {
    const unused: DrawnText[] = [];
    const byGroup = new Map(this.#drawing.groups.map((group) => [group.name, group.fields]));
    for (const { outline } of shapes) {
      const fields = outline.group === '' ? undefined : byGroup.get(outline.group);
      if (!fields || !outline.offered) continue;
      const quantity = /\d+/.exec(fields['QUANTITY'] ?? '');
      outline.name = shortText(fields['PIECE NAME'] ?? '', 80) || outline.name;
      outline.says = {
        ...outline.says,
        ...cuttingWords(
          `${fields['ANNOTATION'] ?? ''} ${fields['CATEGORY'] ?? ''} ${fields['MATERIAL'] ?? ''}`
        ),
        ...(quantity ? { howMany: Math.min(200, Math.max(1, Number(quantity[0]))) } : {})
      };
    }
    const texts = this.#drawing.texts.map((text) => {
      const outline = this.#outlineAt(text.at, text.group, shapes);
      return {
        ...text,
        text: shortText(text.text),
        layer: shortText(text.layer, 80),
        group: shortText(text.group, 80),
        outline
      };
    });
    for (const text of texts) {
      const outline = shapes.find((shape) => shape.outline.id === text.outline)?.outline;
      const words = cuttingWords(text.text);
      if (outline && words) outline.says = { ...outline.says, ...words };
      else if (/^grain/i.test(text.text) || /^[A-Z ]{3,24}:/.test(text.text)) continue;
      else if (outline && outline.name === '') outline.name = shortText(text.text, 80);
      else if (outline?.name.toLowerCase() !== text.text.toLowerCase()) unused.push(text);
    }
    if (unused.length > 0)
      this.#find(
        'text-without-meaning',
        'tells',
        `${unused.length === 1 ? 'One text was' : `${unused.length} texts were`} read but not used: ${unused
          .slice(0, 5)
          .map(({ text }) => `'${shortText(text, 40)}'`)
          .join(', ')}${unused.length > 5 ? ' …' : ''}`,
        unused[0]!.at,
        null,
        unused.length
      );
    return texts;
  }
}

function bare({ id, name, path, layer, group, meaning, outline }: ReadLine): ReadLine {
  return { id, name, path, layer, group, meaning, outline };
}
