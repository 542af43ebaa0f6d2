import type { Point } from '$lib/geometry/point';
import { panelFindings } from '$lib/pattern/panel-check';
import type { PanelFaultKind } from '$lib/pattern/panel-fault';
import { panelSchema, type Panel, type Path, type Segment } from '$lib/pattern/panel';
import { angleOf, innerOf, type ImportChoices, type PanelChoice } from './choices';
import { angleBetween, edgesAt, straightness, type OutlineEdge } from './edges';
import { mapPath, mapPoint, multiply, scaling, translation, type Matrix } from './matrix';
import { boxOf, distance, endOf, flatten, nearestOnPolyline, pathLength } from './path-measure';
import type { Reading, ReadOutline } from './reading';

/** What keeps a choice from becoming a panel: at which field, in words for the person. */
export interface ChoiceProblem {
  outline: string;
  field: keyof PanelChoice;
  message: string;
}

/** A fold edge may stand this far off the grain line in the drawing; the grain is then laid exactly along it. */
const FOLD_OFF_GRAIN = 1;
/** A notch further from the outline than this belongs to something else. */
const NOTCH_WITHIN = 20;

/**
 * The panels that a person made of a reading, or what still keeps them from being panels. Every panel is moved so
 * that the lower left corner of its box is its origin; it is never mirrored, so a left panel stays left.
 */
export function panelsFrom(
  reading: Reading,
  choices: ImportChoices
): { panels: Panel[]; problems: ChoiceProblem[] } {
  const panels: Panel[] = [];
  const problems: ChoiceProblem[] = [];
  const names = new Map<string, string>();
  for (const choice of choices.panels) {
    if (!choice.take) continue;
    const outline = reading.outlines.find(({ id }) => id === choice.outline);
    const refuse = (field: keyof PanelChoice, message: string): void => {
      problems.push({ outline: choice.outline, field, message });
    };
    if (!outline) {
      refuse('outline', 'The file has no such outline.');
      continue;
    }
    if (!outline.offered) {
      refuse('take', 'This outline can’t be a panel: see the findings.');
      continue;
    }
    const before = problems.length;
    if (choice.name === '') refuse('name', 'Give the panel a name.');
    else if (names.has(choice.name.toLowerCase())) refuse('name', `Two panels are called ${choice.name}.`);
    names.set(choice.name.toLowerCase(), choice.outline);
    if (choice.drawn === null) refuse('drawn', 'Say whether the outline is the sew line or the cut line.');
    if (choice.paired && choice.howMany % 2 !== 0)
      refuse('howMany', 'A pair is an even count: half of them left, half right.');
    if (choice.fold !== null && choice.paired)
      refuse('paired', 'A panel on the fold is one whole piece, not a pair.');
    if (distance(choice.grain.from, choice.grain.to) < 1) refuse('grain', 'The grain line is too short.');
    const panel =
      problems.length === before
        ? onePanel(reading, outline, choice, choices.scale, `p${panels.length + 1}`, refuse)
        : null;
    if (!panel || problems.length > before) continue;
    const checked = panelSchema.safeParse(panel);
    const faults = checked.success
      ? panelFindings(checked.data).filter(({ severity }) => severity === 'stops')
      : [];
    for (const { kind, message } of faults.slice(0, 3)) refuse(FAULT_FIELDS[kind] ?? 'corners', message);
    if (checked.success) panels.push(checked.data);
    else for (const issue of checked.error.issues.slice(0, 3)) refuse(fieldOf(issue.path), issue.message);
  }
  if (panels.length === 0 && problems.length === 0)
    problems.push({ outline: '', field: 'take', message: 'Choose at least one outline to be a panel.' });
  return { panels, problems };
}

/** Where the person mends what keeps a panel from being laid; corners for what is not named. */
const FAULT_FIELDS: Partial<Record<PanelFaultKind, keyof PanelChoice>> = {
  'crosses-itself': 'outline',
  'no-area': 'outline',
  clockwise: 'outline',
  'grain-without-length': 'grain',
  'fold-not-straight': 'fold',
  'fold-off-grain': 'fold',
  'fold-crossed': 'fold',
  'allowance-closes-bay': 'allowance',
  'allowance-eats-panel': 'allowance',
  'allowance-lost': 'allowance',
  'cut-out-unclosed': 'inner',
  'cut-out-crosses-itself': 'inner',
  'cut-out-outside': 'inner'
};

/** The choice that a fault of the finished panel goes back to. */
function fieldOf(path: readonly PropertyKey[]): keyof PanelChoice {
  const first = String(path[0] ?? '');
  if (first === 'edges' || first === 'corners') return 'corners';
  if (first === 'cutOuts' || first === 'internalLines' || first === 'drillHoles') return 'inner';
  return (
    (['name', 'howMany', 'paired', 'fold', 'grain', 'grainTolerance', 'note'] as const).find(
      (name) => name === first
    ) ?? 'outline'
  );
}

type Refuse = (field: keyof PanelChoice, message: string) => void;

function onePanel(
  reading: Reading,
  outline: ReadOutline,
  choice: PanelChoice,
  scale: number,
  id: string,
  refuse: Refuse
): Panel | null {
  const origin = { x: outline.box.minX * scale, y: outline.box.minY * scale };
  const toPanel: Matrix = multiply(translation(-origin.x, -origin.y), scaling(scale));
  const path = tidy(mapPath(toPanel, outline.path));
  const stretches = edgesAt(path, choice.corners);
  const inner = innerOf(reading, outline.id).map((other) => ({
    outline: other,
    use: choice.inner[other.id] ?? 'leaveOut',
    path: tidy(mapPath(toPanel, other.path))
  }));
  const sewLines = inner.filter(({ use }) => use === 'sew');
  if (sewLines.length > 1) refuse('inner', 'Only one line inside can be the sew line.');
  if (sewLines.length > 0 && choice.drawn === 'sew')
    refuse('inner', 'The outline itself is the sew line; the line inside can’t be one too.');

  let grain = {
    from: roundPoint(mapPoint(toPanel, choice.grain.from)),
    to: roundPoint(mapPoint(toPanel, choice.grain.to)),
    confirmed: choice.grain.confirmed
  };
  let foldEdge: OutlineEdge | null = null;
  if (choice.fold !== null) {
    foldEdge = stretches.find((edge) => Math.abs(edge.at - choice.fold!) < 1e-3) ?? null;
    const line = foldEdge && straightness(foldEdge);
    if (!foldEdge) refuse('fold', 'The edge on the fold is no longer there; choose it again.');
    else if (!line) refuse('fold', 'The edge on the fold must be straight.');
    else if (angleBetween(line.angle, angleOf(grain)) > FOLD_OFF_GRAIN)
      refuse(
        'fold',
        `The edge on the fold lies ${angleBetween(line.angle, angleOf(grain)).toFixed(1)}° off the grain line; it must be on grain.`
      );
    else grain = { ...grain, ...along(grain, foldEdge) };
  }

  const measured = sewLines[0] ? stretches.map((edge) => distanceInside(edge, sewLines[0]!.path)) : null;
  const edges = stretches.map((edge, i): Panel['edges'][number] => {
    const exception = choice.exceptions.find(({ at }) => Math.abs(at - edge.at) < 1e-3);
    const onFold = edge === foldEdge;
    return {
      id: `e${i + 1}`,
      from: edge.from,
      segments: onFold ? [{ kind: 'line', to: endOf(edge) }] : edge.segments,
      allowance: onFold ? 0 : (measured?.[i] ?? exception?.allowance ?? choice.allowance),
      role: onFold ? 'fold' : (exception?.role ?? 'seam')
    };
  });
  const corners = stretches.map((edge, i) => ({
    id: `c${i + 1}`,
    treatment:
      choice.exceptions.find(({ at }) => Math.abs(at - edge.at) < 1e-3)?.treatment ?? choice.treatment
  }));
  const lines = reading.openLines.filter(
    (line) => line.outline === outline.id && line.meaning !== 'reference' && line.meaning !== 'cutOut'
  );
  return {
    id,
    name: choice.name,
    drawn: choice.drawn!,
    edges,
    corners,
    cutOuts: inner.filter(({ use }) => use === 'cutOut').map((hole) => hole.path),
    notches: notchesOf(reading, outline, edges, toPanel),
    drillHoles: [
      ...reading.drillHoles
        .filter((hole) => hole.outline === outline.id)
        .map((hole) => ({ at: roundPoint(mapPoint(toPanel, hole.at)), note: hole.note.slice(0, 200) })),
      ...inner
        .filter(({ use }) => use === 'drill')
        .map((hole) => ({ at: middleOf(hole.path), note: hole.outline.name }))
    ].map((hole, i) => ({ id: `d${i + 1}`, ...hole })),
    internalLines: [
      ...lines.map((line) => ({ path: tidy(mapPath(toPanel, line.path)), note: line.name.slice(0, 200) })),
      ...inner
        .filter(({ use }) => use === 'internal')
        .map((line) => ({ path: line.path, note: line.outline.name }))
    ].map((line, i) => ({ id: `i${i + 1}`, ...line })),
    grain,
    matchPoints: [],
    howMany: choice.howMany,
    paired: choice.paired,
    hand: choice.hand,
    symmetric: choice.fold === null ? choice.symmetric : true,
    fold: foldEdge ? edges[stretches.indexOf(foldEdge)]!.id : null,
    role: choice.role,
    turns: choice.turns,
    grainTolerance: choice.grainTolerance,
    note: choice.note
  };
}

const round = (value: number): number => Math.round(value * 1e6) / 1e6 + 0;
const roundPoint = ({ x, y }: Point): Point => ({ x: round(x), y: round(y) });

function tidy(path: Path): Path {
  return {
    from: roundPoint(path.from),
    segments: path.segments.map((segment): Segment =>
      segment.kind === 'line'
        ? { kind: 'line', to: roundPoint(segment.to) }
        : {
            kind: 'cubic',
            c1: roundPoint(segment.c1),
            c2: roundPoint(segment.c2),
            to: roundPoint(segment.to)
          }
    )
  };
}

function middleOf(path: Path): Point {
  const box = boxOf(flatten(path));
  return roundPoint({ x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 });
}

/** The grain line turned about its middle until it is exactly parallel to an edge, pointing the way it did. */
function along(grain: { from: Point; to: Point }, edge: OutlineEdge): { from: Point; to: Point } {
  const end = endOf(edge);
  const length = distance(edge.from, end);
  const half = distance(grain.from, grain.to) / 2;
  let [ux, uy] = [(end.x - edge.from.x) / length, (end.y - edge.from.y) / length];
  if (ux * (grain.to.x - grain.from.x) + uy * (grain.to.y - grain.from.y) < 0) [ux, uy] = [-ux, -uy];
  const middle = { x: (grain.from.x + grain.to.x) / 2, y: (grain.from.y + grain.to.y) / 2 };
  return {
    from: { x: middle.x - ux * half, y: middle.y - uy * half },
    to: { x: middle.x + ux * half, y: middle.y + uy * half }
  };
}

/** How far inside an edge a line runs: the middle value over the edge, to a hundredth of a millimetre. */
function distanceInside(edge: OutlineEdge, line: Path): number {
  const sew = flatten(line);
  const points = flatten({ from: edge.from, segments: edge.segments });
  const samples: number[] = [];
  for (let i = 1; i < points.length; i += 1) {
    const [a, b] = [points[i - 1]!, points[i]!];
    const count = Math.max(1, Math.min(20, Math.ceil(distance(a, b) / 10)));
    for (let k = 0; k < count; k += 1) {
      const share = (k + 0.5) / count;
      samples.push(
        nearestOnPolyline({ x: a.x + (b.x - a.x) * share, y: a.y + (b.y - a.y) * share }, sew).distance
      );
    }
  }
  samples.sort((a, b) => a - b);
  return Math.min(300, Math.round((samples[Math.floor(samples.length / 2)] ?? 0) * 100) / 100);
}

/** The notches of an outline by edge and distance along it. */
function notchesOf(
  reading: Reading,
  outline: ReadOutline,
  edges: Panel['edges'],
  toPanel: Matrix
): Panel['notches'] {
  const lines = edges.map((edge) => flatten({ from: edge.from, segments: edge.segments }, 0.005));
  const notches: Panel['notches'] = [];
  for (const mark of reading.notches) {
    if (mark.outline !== outline.id) continue;
    const at = mapPoint(toPanel, mark.at);
    const near = lines
      .map((line, i) => ({ edge: edges[i]!, ...nearestOnPolyline(at, line) }))
      .reduce((best, other) => (other.distance < best.distance ? other : best));
    if (near.distance > NOTCH_WITHIN || near.edge.role === 'fold') continue;
    const length = pathLength({ from: near.edge.from, segments: near.edge.segments });
    notches.push({
      id: `n${notches.length + 1}`,
      edge: near.edge.id,
      distance: round(Math.min(near.along, length)),
      outward: false,
      count: 1
    });
  }
  return notches;
}
