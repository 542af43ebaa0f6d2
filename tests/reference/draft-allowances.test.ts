import { describe, expect, it } from 'vitest';
import { drawDraft } from '$lib/drafting/draft';
import { drafts } from '$lib/drafting/registry';
import { perimeter } from '$lib/geometry/polygon';
import type { Panel } from '$lib/pattern/panel';
import { resolvePanel } from '$lib/pattern/resolve';
import { largest, middle, smallest } from '../unit/drafting/bodies';
import { differenceInArea, offsetBy } from './geometry-libraries';

/*
 * The allowances of drafted panels against the offsets of two independent libraries, and panels mirrored: twice is none.
 */

const sizes = [
  ['smallest', smallest],
  ['middle', middle],
  ['largest', largest]
] as const;

/** Every panel of every draft at three sizes. */
const all = drafts.flatMap((draft) =>
  sizes.flatMap(([size, body]) => {
    const drawn = drawDraft(draft, body);
    if (!drawn.ok) throw new Error(`${draft.id}, ${size}: ${drawn.faults[0]!.message}`);
    return drawn.result.panels.map((panel) => ({ name: `${draft.id}, ${size}, ${panel.name}`, panel }));
  })
);

/** One allowance all round, mitred: what the libraries can do too. */
const even = (panel: Panel, allowance: number): Panel => ({
  ...panel,
  edges: panel.edges.map((edge) => ({ ...edge, allowance: edge.id === panel.fold ? 0 : allowance })),
  corners: panel.corners.map((corner) => ({ ...corner, treatment: 'mitred' }))
});

/** The other hand of a panel: mirrored, and run round the other way. */
function mirrored(panel: Panel): Panel {
  const over = ({ x, y }: { x: number; y: number }) => ({ x: -x + 0, y });
  const edges = panel.edges
    .map((edge) => {
      const stops = [edge.from, ...edge.segments.map(({ to }) => to)];
      const segments = edge.segments
        .map((segment, i) =>
          segment.kind === 'line'
            ? { kind: 'line' as const, to: over(stops[i]!) }
            : { kind: 'cubic' as const, c1: over(segment.c2), c2: over(segment.c1), to: over(stops[i]!) }
        )
        .reverse();
      return { ...edge, from: over(stops[stops.length - 1]!), segments };
    })
    .reverse();
  return {
    ...panel,
    edges,
    notches: [],
    matchPoints: [],
    drillHoles: [],
    internalLines: [],
    grain: { ...panel.grain, from: over(panel.grain.from), to: over(panel.grain.to) }
  };
}

describe('drafted panels', () => {
  it.each(Object.entries(offsetBy))(
    'have the allowance that %s gives',
    (_library, offset) => {
      let compared = 0;
      for (const { name, panel } of all)
        for (const allowance of [10, 25]) {
          const shape = resolvePanel(even(panel, allowance));
          // The corners of a blunt fold or of a strip narrower than its curve are still mitred alike.
          const theirs = offset(shape.sew, allowance);
          expect(differenceInArea(shape.cut, theirs), `${name}, ${allowance} mm`).toBeLessThan(
            0.003 * perimeter(theirs)
          );
          compared++;
        }
      expect(compared).toBeGreaterThan(50);
    },
    60_000
  );

  it('mirrored once have the same sew line mirrored, and mirrored twice are themselves', () => {
    for (const { name, panel } of all) {
      const bare = { ...panel, notches: [], matchPoints: [], drillHoles: [], internalLines: [] };
      expect(mirrored(mirrored(panel)).edges, name).toEqual(bare.edges);
      const [one, other] = [resolvePanel(bare), resolvePanel(mirrored(panel))];
      // With the grain upright along +x, the mirror image lies over the x axis.
      const image = one.sew.map(({ x, y }) => ({ x, y: -y })).reverse();
      expect(differenceInArea(image, other.sew), name).toBeLessThan(0.002 * perimeter(one.sew));
    }
  });
});
