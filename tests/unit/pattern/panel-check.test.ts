import { describe, expect, it } from 'vitest';
import { panelFindings } from '$lib/pattern/panel-check';
import type { Panel } from '$lib/pattern/panel';
import { box, points } from '../geometry/outlines';
import { straightPanel } from './panels';

const kinds = (panel: Panel) => panelFindings(panel).map(({ kind, severity }) => `${kind} ${severity}`);
const ring = (outline: ReturnType<typeof points>) => ({
  from: outline[0]!,
  segments: [...outline.slice(1), outline[0]!].map((to) => ({ kind: 'line' as const, to }))
});

describe('what is wrong with a panel', () => {
  it('is nothing for a sound one', () => {
    expect(panelFindings(straightPanel(box(0, 0, 300, 200)))).toEqual([]);
    expect(
      panelFindings(
        straightPanel(points([0, 0], [300, 0], [300, 200], [200, 200], [150, 120], [100, 200], [0, 200]))
      )
    ).toEqual([]);
  });

  it('is told all at once, what stops first', () => {
    const slot = points([0, 0], [300, 0], [300, 200], [158, 200], [155, 80], [145, 80], [142, 200], [0, 200]);
    const found = kinds(
      straightPanel(slot, {
        more: {
          notches: [{ id: 'n', edge: 'e0', distance: 301, outward: false, count: 1 }],
          matchPoints: [{ id: 'm', name: 'waist', edge: 'e1', distance: 201 }],
          cutOuts: [
            ring(box(250, 50, 350, 80)),
            ring(points([20, 20], [40, 40], [40, 20], [20, 40])),
            { from: { x: 50, y: 50 }, segments: [{ kind: 'line', to: { x: 80, y: 50 } }] }
          ]
        }
      })
    );
    expect(found).toEqual([
      'notch-past-end stops',
      'match-point-past-end stops',
      'cut-out-outside stops',
      'cut-out-crosses-itself stops',
      'cut-out-unclosed stops',
      'allowance-closes-bay warns',
      'allowance-closes-bay warns',
      'allowance-closes-bay warns'
    ]);
  });

  it('says how far a fold leaves the straight line, and where', () => {
    const panel = straightPanel(box(0, 0, 300, 200), {
      allowances: [10, 10, 10, 0],
      more: {
        fold: 'e3',
        symmetric: true,
        grain: { from: { x: 9, y: 150 }, to: { x: 9, y: 50 }, confirmed: true }
      }
    });
    expect(panelFindings(panel)).toEqual([]);
    const bent = { ...panel, edges: panel.edges.map((edge) => ({ ...edge })) };
    bent.edges[3]!.segments = [
      { kind: 'line', to: { x: 0.4, y: 100 } },
      { kind: 'line', to: { x: 0, y: 0 } }
    ];
    const [finding] = panelFindings(bent);
    expect(finding).toMatchObject({ kind: 'fold-not-straight', place: { x: 0.4, y: 100 } });
    expect(finding!.message).toContain('0.4 mm');
  });
});
