import { expect, it } from 'vitest';
import { area, isSimple, locate } from '$lib/geometry/polygon';
import { cornerTreatments, type Panel } from '$lib/pattern/panel';
import { PanelFault } from '$lib/pattern/panel-fault';
import { resolvePanel } from '$lib/pattern/resolve';
import { distanceTo } from '../geometry/brute-force';
import { randomFrom, star } from '../geometry/outlines';
import { straightPanel } from './panels';

/** A wild panel: any allowances, corners, curves, grain; on the fold, or drawn as its cut line, now and then. */
function wildPanel(seed: number): Panel {
  const random = randomFrom(seed);
  const pick = <T>(list: readonly T[]): T => list[Math.floor(random() * list.length)]!;
  const outline = star(4 + Math.floor(random() * 10), 40 + random() * 300, random);
  const panel = straightPanel(outline, {
    allowances: outline.map(() => pick([0, 6, 10, 15, 40, 25.4])),
    treatments: outline.map(() => pick(cornerTreatments)),
    roles: outline.map(() => (random() < 0.2 ? 'hem' : 'seam')),
    more: {
      grain: { from: { x: 0, y: 0 }, to: { x: random() - 0.5, y: random() - 0.5 }, confirmed: true },
      drawn: random() < 0.2 ? 'cut' : 'sew'
    }
  });
  panel.edges = panel.edges.map((edge) => {
    if (random() < 0.5) return edge;
    const { from } = edge;
    const { to } = edge.segments[0]!;
    const [dx, dy] = [to.x - from.x, to.y - from.y];
    const [a, b] = [(random() - 0.5) * 0.8, (random() - 0.5) * 0.8];
    const c1 = { x: from.x + dx / 3 - dy * a, y: from.y + dy / 3 + dx * a };
    const c2 = { x: from.x + (2 * dx) / 3 - dy * b, y: from.y + (2 * dy) / 3 + dx * b };
    return { ...edge, segments: [{ kind: 'cubic' as const, c1, c2, to }] };
  });
  if (random() < 0.3) {
    const k = Math.floor(random() * outline.length);
    const to = panel.edges[(k + 1) % outline.length]!.from;
    const edge = {
      ...panel.edges[k]!,
      segments: [{ kind: 'line' as const, to }],
      role: 'fold' as const,
      allowance: 0
    };
    panel.edges[k] = edge;
    panel.fold = edge.id;
    panel.grain = { from: edge.from, to, confirmed: true };
  }
  return panel;
}

// 3261: a mirrored hem allowance that bent back into the panel.
it('resolves any panel into a simple piece around its sew line, or says what is wrong with it (seeds 1 to 150, 3261)', () => {
  let resolved = 0;
  for (const seed of [3261, ...Array.from({ length: 150 }, (_, i) => i + 1)]) {
    const panel = wildPanel(seed);
    try {
      const { cut, sew, label } = resolvePanel(panel);
      resolved++;
      expect(isSimple(cut), `seed ${seed}`).toBe(true);
      expect(isSimple(sew), `seed ${seed}`).toBe(true);
      expect(area(cut), `seed ${seed}`).toBeGreaterThan(0);
      expect(locate(cut, label), `seed ${seed}`).toBe('inside');
      for (const p of sew)
        expect(
          locate(cut, p) !== 'outside' || distanceTo(cut, p) < 0.003,
          `seed ${seed} at ${p.x}, ${p.y}`
        ).toBe(true);
    } catch (error) {
      if (!(error instanceof PanelFault)) throw error;
      expect(error.finding.message.length).toBeGreaterThan(20);
    }
  }
  expect(resolved).toBeGreaterThan(100);
});
