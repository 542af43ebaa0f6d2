import { flatten, pathLength, placeAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { boundingBox } from '$lib/geometry/polygon';
import { cutLine } from '$lib/pattern/allowance';
import { edgePath, flatEdges, outlineOfEdges } from '$lib/pattern/flat-edge';
import type { Panel } from '$lib/pattern/panel';
import type { Sheet } from './construction';

/*
 * The pictures of a draft as SVG: the construction up to a step, and the finished panels side by side. Colours come from the
 * page: everything is drawn in currentColor, told apart by line and weight.
 */

const number = (v: number): string => String(Math.round(v * 10) / 10);
const at = ({ x, y }: Point): string => `${number(x)} ${number(y)}`;

/** An SVG path of the curves themselves; `flip` mirrors y. */
export function svgPath(path: Path, flip = false): string {
  const p = ({ x, y }: Point) => at({ x, y: flip ? -y : y });
  return [
    `M${p(path.from)}`,
    ...path.segments.map((segment) =>
      segment.kind === 'line' ? `L${p(segment.to)}` : `C${p(segment.c1)} ${p(segment.c2)} ${p(segment.to)}`
    )
  ].join(' ');
}

const escaped = (text: string): string => text.replace(/[&<>"]/g, (c) => `&#${c.charCodeAt(0)};`);

/**
 * The construction after its first `steps` steps (all, if not given); what the last of them drew is heavier. Drawn at one scale
 * for all steps of a sheet, so that the figure grows and does not jump.
 */
export function sheetFigure(sheet: Sheet, steps = sheet.steps.length, title = 'Construction'): string {
  const points: Point[] = [];
  for (const { marks } of sheet.steps)
    for (const mark of marks) {
      if (mark.kind === 'point') points.push(mark.at);
      else points.push(...flatten(mark.path, 1));
    }
  if (points.length === 0) return '';
  const box = boundingBox(points);
  const size = Math.max(box.maxX - box.minX, box.maxY - box.minY, 1);
  const margin = size * 0.06;
  const text = size * 0.024;
  const drawn: string[] = [];
  const names: string[] = [];
  sheet.steps.slice(0, steps).forEach(({ marks }, i) => {
    const fresh = i === steps - 1 && steps < sheet.steps.length;
    for (const mark of marks) {
      if (mark.kind === 'point') {
        const r = number(text * (fresh ? 0.32 : 0.2));
        drawn.push(
          `<circle cx="${number(mark.at.x)}" cy="${number(mark.at.y)}" r="${r}" fill="currentColor"/>`
        );
        names.push(
          `<text x="${number(mark.at.x + text * 0.4)}" y="${number(mark.at.y - text * 0.35)}"${fresh ? ' font-weight="600"' : ''}>${escaped(mark.name)}</text>`
        );
        continue;
      }
      const width = size * (mark.use === 'line' ? 0.0035 : 0.0016) * (fresh ? 1.8 : 1);
      const dash =
        mark.use === 'line'
          ? ''
          : ` stroke-dasharray="${number(size * (mark.use === 'level' ? 0.02 : 0.008))} ${number(size * 0.008)}"`;
      const faint = mark.use === 'line' || fresh ? '' : ' opacity="0.55"';
      drawn.push(`<path d="${svgPath(mark.path)}" stroke-width="${number(width)}"${dash}${faint}/>`);
    }
  });
  const view = [
    box.minX - margin,
    box.minY - margin,
    box.maxX - box.minX + 2 * margin,
    box.maxY - box.minY + 2 * margin
  ].map(number);
  return (
    `<svg xmlns="http://www.w3.org/2000/svg" viewBox="${view.join(' ')}" role="img" aria-label="${escaped(title)}">` +
    `<g fill="none" stroke="currentColor" stroke-linecap="round" stroke-linejoin="round">${drawn.join('')}</g>` +
    `<g fill="currentColor" font-size="${number(text)}" font-family="inherit">${names.join('')}</g></svg>`
  );
}

const asDrawn = (point: Point): Point => point;

/** A panel's cut line as drawn, its fold not opened; the outline itself where nothing is added to it. */
function cutOf(panel: Panel): readonly Point[] {
  const edges = flatEdges(panel, asDrawn);
  const adds = panel.drawn === 'sew' && edges.some(({ allowance }) => allowance > 0);
  return adds ? cutLine(edges) : outlineOfEdges(edges);
}

/** A panel's notches as strokes across its allowances, `least` long where there are none. */
function notchMarks(panel: Panel, least: number): (readonly [Point, Point])[] {
  return panel.notches.flatMap((notch) => {
    const edge = panel.edges.find(({ id }) => id === notch.edge);
    if (!edge) return [];
    const path = edgePath(edge, asDrawn);
    const { point, tangent } = placeAt(path, Math.min(notch.distance, pathLength(path)));
    const out = panel.drawn === 'sew' && edge.allowance > 0 ? edge.allowance : -least;
    return [[point, { x: point.x + tangent.y * out, y: point.y - tangent.x * out }] as const];
  });
}

/** The panels side by side at one scale: sew and cut lines, notches, folds, grain and names. */
export function panelsFigure(panels: readonly Panel[], title = 'Panels'): string {
  const cuts = panels.map(cutOf);
  const boxes = cuts.map((cut) => boundingBox(cut));
  const tallest = Math.max(...boxes.map((box) => box.maxY - box.minY), 1);
  /** Rows this wide read well beside text. */
  const wide = Math.max(tallest * 2.6, ...boxes.map((box) => box.maxX - box.minX));
  const gap = tallest * 0.08;
  const text = tallest * 0.032;
  let x = 0;
  let y = 0;
  let rowHeight = 0;
  let farthest = 0;
  const groups = panels.map((panel, i) => {
    const box = boxes[i]!;
    // At least as wide as its name.
    const width = Math.max(box.maxX - box.minX, panel.name.length * text * 0.6);
    if (x > 0 && x + width > wide) {
      x = 0;
      y += rowHeight + text * 2.4 + gap;
      rowHeight = 0;
    }
    const dx = x - box.minX;
    const dy = y + box.maxY;
    x += width + gap;
    farthest = Math.max(farthest, x);
    rowHeight = Math.max(rowHeight, box.maxY - box.minY);
    const lines = panel.edges.map((edge) => {
      const fold = edge.role === 'fold';
      return `<path d="${svgPath(
        edgePath(edge, (p) => p),
        true
      )}" stroke-width="${number(tallest * 0.004)}"${fold ? ` stroke-dasharray="${number(gap * 0.35)} ${number(gap * 0.15)} ${number(gap * 0.05)} ${number(gap * 0.15)}"` : ''}/>`;
    });
    const outer =
      panel.drawn === 'sew'
        ? `<path d="M${cuts[i]!.map(({ x: px, y: py }) => at({ x: px, y: -py })).join(' L')} Z" stroke-width="${number(tallest * 0.002)}" opacity="0.7"/>`
        : '';
    const notches = notchMarks(panel, tallest * 0.015).map(
      ([from, to]) =>
        `<path d="M${at({ x: from.x, y: -from.y })} L${at({ x: to.x, y: -to.y })}" stroke-width="${number(tallest * 0.003)}"/>`
    );
    const inside = panel.internalLines.map(
      ({ path }) =>
        `<path d="${svgPath(path, true)}" stroke-width="${number(tallest * 0.002)}" stroke-dasharray="${number(gap * 0.12)} ${number(gap * 0.12)}"/>`
    );
    const { from, to } = panel.grain;
    const grain = `<path d="M${at({ x: from.x, y: -from.y })} L${at({ x: to.x, y: -to.y })}" stroke-width="${number(tallest * 0.002)}" opacity="0.6"/>`;
    return (
      `<g transform="translate(${number(dx)} ${number(dy)})">` +
      `<g fill="none" stroke="currentColor" stroke-linecap="round" stroke-linejoin="round">${outer}${lines.join('')}${notches.join('')}${inside.join('')}${grain}</g>` +
      `<text x="${number(box.minX)}" y="${number(-box.minY + text * 1.6)}" font-size="${number(text)}" fill="currentColor">${escaped(panel.name)}</text></g>`
    );
  });
  const margin = gap / 2;
  const view = [-margin, -margin, farthest - gap + 2 * margin, y + rowHeight + text * 2.4 + 2 * margin].map(
    number
  );
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="${view.join(' ')}" role="img" aria-label="${escaped(title)}">${groups.join('')}</svg>`;
}
