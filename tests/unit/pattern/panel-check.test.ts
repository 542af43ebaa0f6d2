import { describe, expect, it } from 'vitest';
import { area } from '$lib/geometry/polygon';
import { panelFindings } from '$lib/pattern/panel-check';
import type { Panel } from '$lib/pattern/panel';
import { resolvePanel } from '$lib/pattern/resolve';
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

  it('is an allowance so wide for its short edge that the cut line would lose it: told, never dropped', () => {
    const outline = points(
      ...([
        [24.33, 7.837],
        [14.398, 11.195],
        [6.076, 10.609],
        [1.095, 12.401],
        [-5.633, 8.644],
        [-20.302, 9.704],
        [-12.685, 1.271],
        [-9.431, -5.882],
        [-6.598, -6.215],
        [-2.119, -9.513],
        [2.737, -7.406],
        [7.205, -8.399],
        [18.369, -7.365]
      ] as [number, number][])
    );
    const panel = straightPanel(outline, { allowances: [0, 40, 0, 10, 15, 5, 40, 0, 40, 5, 15, 40, 15] });
    const square = {
      ...panel,
      corners: panel.corners.map((one) => ({ ...one, treatment: 'square' as const }))
    };
    const held = panelFindings(square).every(({ kind }) => kind !== 'allowance-lost');
    // Where every strip is there, nothing is said; where one is not, release is out of the question.
    if (held) {
      const { cut } = resolvePanel(square);
      expect(area(cut)).toBeGreaterThan(area(outline) + 8 * 40);
    } else expect(() => resolvePanel(square)).toThrow(/would be missing/);
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
