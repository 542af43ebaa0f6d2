import type { DeskTool, DeskView } from '$lib/client/desk-view.svelte';
import { deletePoint, movePoint, outlinePoints, setStretch } from '$lib/pattern/edit-points';

/* The keys of the desk. */

export const toolWords: Readonly<Record<DeskTool, { word: string; key: string; says: string }>> = {
  pick: { word: 'Move', key: 'V', says: 'Drag points and handles; click an edge to pick it.' },
  point: { word: 'Point', key: 'P', says: 'Click where an edge gets a point.' },
  notch: { word: 'Notch', key: 'N', says: 'Click where an edge gets a notch.' },
  hole: { word: 'Drill hole', key: 'H', says: 'Click where a drill hole goes.' },
  line: { word: 'Line', key: 'L', says: 'Click where the line starts, then where it ends.' },
  grain: { word: 'Grain', key: 'R', says: 'Click where the grain line starts, then where it ends.' },
  cut: { word: 'Cut', key: 'K', says: 'Click two places: the panel is cut along their line.' },
  measure: { word: 'Measure', key: 'M', says: 'Click two places.' }
};

const arrows: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowUp: [0, 1],
  ArrowDown: [0, -1]
};

/** What a key does at the desk; false when nothing. */
export function deskKey(view: DeskView, event: KeyboardEvent): boolean {
  const { desk } = view;
  const point =
    view.picked &&
    outlinePoints(desk.panel).find(({ edge, at }) => edge === view.picked!.edge && at === view.picked!.at);
  if (event.ctrlKey || event.metaKey) {
    if (event.key.toLowerCase() === 'z') {
      if (event.shiftKey) desk.redo();
      else desk.undo();
      return true;
    }
    if (event.key.toLowerCase() === 'y') {
      desk.redo();
      return true;
    }
    return false;
  }
  const arrow = arrows[event.key];
  if (arrow && point) {
    const by = event.altKey ? 0.1 : event.shiftKey ? 10 : 1;
    const to = { x: point.point.x + arrow[0] * by, y: point.point.y + arrow[1] * by };
    desk.take(
      movePoint(desk.panel, point, to),
      `moved a ${point.corner ? 'corner' : 'point'} of ${point.edge}`
    );
    return true;
  }
  const tool = (Object.keys(toolWords) as DeskTool[]).find(
    (one) => toolWords[one].key === event.key.toUpperCase()
  );
  if (tool) {
    view.choose(tool);
    desk.say(`${toolWords[tool].word}: ${toolWords[tool].says}`);
    return true;
  }
  switch (event.key) {
    case ']':
      view.step(1);
      return true;
    case '[':
      view.step(-1);
      return true;
    case '+':
    case '=':
      view.zoom(1.25);
      return true;
    case '-':
      view.zoom(0.8);
      return true;
    case '0':
      view.fit();
      return true;
    case 'Escape':
      view.choose('pick');
      view.pick(null);
      return true;
    case 'c':
    case 'C':
      if (!point) return false;
      {
        const kind = desk.panel.edges.find(({ id }) => id === point.edge)!.segments[point.at]!.kind;
        desk.take(
          setStretch(desk.panel, point.edge, point.at, kind === 'line' ? 'cubic' : 'line'),
          `made ${point.edge} ${kind === 'line' ? 'a curve' : 'straight'}`
        );
      }
      return true;
    case 'Delete':
    case 'Backspace':
      if (!point) return false;
      if (desk.take(deletePoint(desk.panel, point), `took a point off ${point.edge}`)) view.pick(null);
      return true;
  }
  return false;
}
