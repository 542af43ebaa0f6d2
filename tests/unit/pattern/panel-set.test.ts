import { describe, expect, it } from 'vitest';
import { openPanelSet, UnreadablePanelSet, type PanelSetUpgrade } from '$lib/pattern/panel-set';
import { box } from '../geometry/outlines';
import { straightPanel } from './panels';

const panel = straightPanel(box(0, 0, 300, 200));

describe('the door of panel sets', () => {
  it('lets a set of the present schema in, as it is', () => {
    const set = { schema: 1, panels: [panel] };
    expect(openPanelSet(JSON.parse(JSON.stringify(set)))).toEqual(set);
  });

  it.each([
    ['no object', 'panels', 'Expected a set of panels, got string'],
    ['a list', [], 'got a list'],
    ['no schema', { panels: [panel] }, 'Expected a schema number of 1 to 1, got undefined'],
    ['a newer schema', { schema: 2, panels: [panel] }, 'Expected schema 1 or older, got 2'],
    ['no panels', { schema: 1, panels: [] }, 'panels'],
    [
      'too many',
      { schema: 1, panels: Array.from({ length: 301 }, () => panel) },
      'at most 300 panels, got 301'
    ],
    ['a panel twice', { schema: 1, panels: [panel, panel] }, 'got panel twice'],
    [
      'an odd pair',
      { schema: 1, panels: [{ ...panel, paired: true, howMany: 3 }] },
      'A pair is an even count'
    ],
    [
      'edges that part',
      { schema: 1, panels: [{ ...panel, edges: panel.edges.slice(1), corners: panel.corners.slice(1) }] },
      'ends at'
    ]
  ])('refuses %s and says what it got', (_, json, reason) => {
    expect(() => openPanelSet(json)).toThrow(UnreadablePanelSet);
    expect(() => openPanelSet(json)).toThrow(reason);
  });

  it('brings older sets up, one number at a time', () => {
    const steps = new Map<number, PanelSetUpgrade>([
      [1, ({ outlines, ...set }) => ({ ...set, shapes: outlines })],
      [2, ({ shapes, ...set }) => ({ ...set, panels: shapes })]
    ]);
    expect(openPanelSet({ schema: 1, outlines: [panel] }, steps, 3).panels).toEqual([panel]);
    expect(() => openPanelSet({ schema: 1, outlines: [panel] }, new Map(), 3)).toThrow(
      'can no longer be read'
    );
  });
});
