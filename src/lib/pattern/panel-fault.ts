import type { Point } from '$lib/geometry/point';

/** What can be wrong with a panel, so that it can't be resolved into a piece, or not as it was meant. */
export const panelFaultKinds = [
  'edge-without-length',
  'crosses-itself',
  'no-area',
  'clockwise',
  'grain-without-length',
  'fold-not-straight',
  'fold-off-grain',
  'fold-crossed',
  'allowance-closes-bay',
  'allowance-eats-panel',
  'allowance-lost',
  'cut-out-unclosed',
  'cut-out-crosses-itself',
  'cut-out-outside',
  'notch-past-end',
  'match-point-past-end'
] as const;
export type PanelFaultKind = (typeof panelFaultKinds)[number];

export interface PanelFinding {
  readonly kind: PanelFaultKind;
  /** What stops keeps the panel from being resolved; what warns is resolved as the message says. */
  readonly severity: 'stops' | 'warns';
  /** Where, in the panel's own coordinates; null when it concerns the whole panel. */
  readonly place: Point | null;
  /** In plain English, with measures in millimetres. */
  readonly message: string;
}

/** A panel that can't be resolved: its first finding that stops. */
export class PanelFault extends Error {
  constructor(
    readonly panel: string,
    readonly finding: PanelFinding
  ) {
    super(`${panel}: ${finding.message}`);
    this.name = 'PanelFault';
  }
}
