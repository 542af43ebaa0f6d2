import type { HandleName, PointName } from '$lib/pattern/edit-points';
import { outlinePoints } from '$lib/pattern/edit-points';
import { nearestEdge } from '$lib/pattern/edge-places';
import { addDrillHole, addInternalLine, addNotch, setGrain } from '$lib/pattern/edit-marks';
import { addPoint } from '$lib/pattern/edit-points';
import { cutStraight } from '$lib/pattern/cut-panel';
import { freeId } from '$lib/pattern/edited';
import type { Panel } from '$lib/pattern/panel';
import type { Point } from '$lib/geometry/point';
import { straightPath } from '$lib/geometry/path';
import { boundingBox } from '$lib/geometry/polygon';
import { flatEdges, outlineOfEdges } from '$lib/pattern/flat-edge';
import type { OpenDesk } from './open-desk.svelte';
import { fitted, zoomed, type Viewport } from './viewport';

/* What the desk shows and holds: the view, what is picked, the tool in hand. */

export const deskTools = ['pick', 'point', 'notch', 'hole', 'line', 'grain', 'cut', 'measure'] as const;
export type DeskTool = (typeof deskTools)[number];

export type Held =
  | { readonly kind: 'point'; readonly name: PointName }
  | { readonly kind: 'handle'; readonly name: HandleName };

/** Allowance along a new cut: a seam's. */
const CUT_ALLOWANCE = 10;

export class DeskView {
  view: Viewport = $state.raw({ lie: 'across', scale: 1, originX: 0, originY: 0, width: 800, height: 600 });
  picked: PointName | null = $state.raw(null);
  edge: string | null = $state(null);
  tool: DeskTool = $state('pick');
  snap = $state({ grid: false, square: true, level: true });
  /** Places already given to a tool that asks for two. */
  first: Point | null = $state.raw(null);
  measured: { readonly a: Point; readonly b: Point } | null = $state.raw(null);
  /** The panels as they would be, drawn dashed. */
  preview: readonly Panel[] = $state.raw([]);

  constructor(readonly desk: OpenDesk) {}

  /** Distance of the grid's lines: a step of 1, 2 or 5 that stands at least 18 pixels apart. */
  get gridStep(): number {
    for (const step of [1, 2, 5, 10, 20, 50, 100, 200, 500]) if (step * this.view.scale >= 18) return step;
    return 1000;
  }

  choose(tool: DeskTool): void {
    this.tool = tool;
    this.first = null;
    this.measured = null;
  }

  fit(): void {
    const box = boundingBox(outlineOfEdges(flatEdges(this.desk.panel, (p) => p)));
    this.view = fitted(this.view, box, { left: 48, right: 48, top: 56, bottom: 48 });
  }

  zoom(factor: number): void {
    this.view = zoomed(this.view, factor, { left: this.view.width / 2, top: this.view.height / 2 });
  }

  pick(name: PointName | null): void {
    this.picked = name;
    if (name) this.edge = name.edge;
  }

  /** The next point of the outline, or the one before. */
  step(by: 1 | -1): void {
    const points = outlinePoints(this.desk.panel);
    const at = points.findIndex((one) => one.edge === this.picked?.edge && one.at === this.picked.at);
    const next = points[(at + by + points.length) % points.length]!;
    this.pick({ edge: next.edge, at: next.at });
    this.desk.say(
      `Point ${points.indexOf(next) + 1} of ${points.length}, ${next.corner ? 'corner' : 'point'} of ${next.edge}.`
    );
  }

  /** A place was given to the tool in hand. */
  place(at: Point): void {
    const { desk } = this;
    const { panel } = desk;
    const near = nearestEdge(panel, at);
    switch (this.tool) {
      case 'pick':
        return;
      case 'point':
        if (desk.take(addPoint(panel, near.edge, near.distance), `added a point to ${near.edge}`))
          this.edge = near.edge;
        return;
      case 'notch':
        if (desk.take(addNotch(panel, near.edge, near.distance), `added a notch to ${near.edge}`))
          this.edge = near.edge;
        return;
      case 'hole':
        desk.take(addDrillHole(panel, at), 'added a drill hole');
        return;
    }
    if (this.first === null) {
      this.first = at;
      this.measured = null;
      return;
    }
    const a = this.first;
    this.first = null;
    if (this.tool === 'measure') this.measured = { a, b: at };
    else if (this.tool === 'line') desk.take(addInternalLine(panel, straightPath([a, at])), 'drew a line');
    else if (this.tool === 'grain') desk.take(setGrain(panel, a, at), 'drew the grain anew');
    else this.cut(a, at);
  }

  cut(a: Point, b: Point): void {
    const { panel, panels } = this.desk;
    const names = panels.map(({ name }) => name);
    const cut = cutStraight(panel, a, b, {
      allowance: CUT_ALLOWANCE,
      id: freeId(
        panel.id,
        panels.map(({ id }) => id)
      ),
      name: freeName(panel.name, names)
    });
    if (cut.refused !== undefined) this.desk.say(cut.refused, true);
    else if (this.desk.change({ panels: cut.made }, 'cut into two panels')) this.choose('pick');
  }
}

/** 'Front 2' where there is a Front. */
export function freeName(wish: string, names: readonly string[]): string {
  const taken = names.map((name) => name.toLowerCase());
  for (let n = 2; ; n++) {
    const name = `${wish.slice(0, 74)} ${n}`;
    if (!taken.includes(name.toLowerCase())) return name;
  }
}
