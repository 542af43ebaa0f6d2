import type { Point } from '$lib/geometry/point';
import { cutLine } from '$lib/pattern/allowance';
import { flatEdges } from '$lib/pattern/flat-edge';
import type { Panel } from '$lib/pattern/panel';
import { panelFindings } from '$lib/pattern/panel-check';

/** The cut line round a panel as it is drawn, or null where there is none to show: drawn as its cut line, or a panel that does not hold. */
export function offsetShown(panel: Panel): Point[] | null {
  if (panel.drawn === 'cut' || panel.edges.every(({ allowance }) => allowance === 0)) return null;
  if (panelFindings(panel).some(({ severity }) => severity === 'stops')) return null;
  return cutLine(flatEdges(panel, (p) => p));
}
