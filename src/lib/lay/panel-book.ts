import type { ClothRole, Panel, TurnSet } from '$lib/pattern/panel';
import type { PieceShape } from '$lib/pattern/piece-shape';
import { resolvePanel } from '$lib/pattern/resolve';
import type { Degrees } from '$lib/units/measure';
import type { Garment } from './document';

/** What a lay knows of a panel: its resolved shape and the rules that it is laid by. Plain JSON. */
export interface LayPanel {
  readonly shape: PieceShape;
  readonly role: ClothRole;
  readonly howMany: number;
  readonly paired: boolean;
  readonly turns: TurnSet;
  readonly grainTolerance: Degrees;
  /** False while the grain line is a guess: such a panel can't be released. */
  readonly grainConfirmed: boolean;
}

/** What a lay has to know of `panel`. Throws PanelFault for a panel that gives no piece. */
export function layPanelOf(panel: Panel): LayPanel {
  return {
    shape: resolvePanel(panel),
    role: panel.role,
    howMany: panel.howMany,
    paired: panel.paired,
    turns: panel.turns,
    grainTolerance: panel.grainTolerance,
    grainConfirmed: panel.grain.confirmed
  };
}

/** Every panel of a lay by `panelKey`. As JSON (API, revisions) it is a plain record. */
export type PanelBook = Readonly<Record<string, LayPanel>>;

/** The name of a panel across style versions. */
export function panelKey(styleVersion: string, panel: string): string {
  return `${styleVersion}/${panel}`;
}

/** The panel that a placement or need of `garment` names; undefined when the book lacks it. */
export function panelOf(book: PanelBook, garment: Garment | undefined, panel: string): LayPanel | undefined {
  return garment && book[panelKey(garment.styleVersion, panel)];
}
