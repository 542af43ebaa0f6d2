import * as commands from '$lib/lay/commands';
import { snug, type SnugWay } from '$lib/lay/snug';
import type { OpenLay } from './open-lay.svelte';
import type { TableView } from './table-view.svelte';
import { arrowOnCloth } from './viewport';

/*
 * Everything a person can do at the Lay table, once: the toolbar, the keys, the list of pieces and the help sheet
 * all take it from here.
 */

/** What a command acts on. */
export interface Desk {
  readonly lay: OpenLay;
  readonly table: TableView;
  /** Panels of the screen that a command opens. */
  readonly open: (
    sheet:
      'help' | 'copy' | 'cloth' | 'spread' | 'match' | 'release' | 'keep' | 'revisions' | 'settle' | 'pieces'
  ) => void;
}

export type CommandGroup = 'Pieces' | 'Turning' | 'Snug' | 'Moving' | 'Picking' | 'Looking' | 'Lay';

export interface TableCommand {
  readonly id: string;
  readonly label: string;
  readonly group: CommandGroup;
  /** Keys as `Mod+Shift+Z`, `Alt+ArrowLeft`, `?`; the first is shown. `Mod` is ctrl, or ⌘ on a Mac. */
  readonly keys: readonly string[];
  /** Whether holding the key repeats it. */
  readonly repeats?: boolean;
  readonly enabled: (desk: Desk) => boolean;
  readonly perform: (desk: Desk) => void;
}

const always = (): boolean => true;
const picked = ({ lay }: Desk): boolean => lay.picked.length > 0 && !lay.readOnly;
const writable = ({ lay }: Desk): boolean => !lay.readOnly;

const arrows = ['ArrowLeft', 'ArrowRight', 'ArrowUp', 'ArrowDown'] as const;
const arrowWords = { ArrowLeft: 'left', ArrowRight: 'right', ArrowUp: 'up', ArrowDown: 'down' } as const;

function nudges(step: number, modifier: string, words: string): TableCommand[] {
  return arrows.map((arrow) => ({
    id: `nudge-${step}-${arrowWords[arrow]}`,
    label: `Move ${arrowWords[arrow]} by ${words}`,
    group: 'Moving',
    keys: [modifier + arrow],
    repeats: true,
    enabled: picked,
    perform: ({ lay, table }) => {
      const way = arrowOnCloth(table.view.lie, arrow);
      lay.do(
        commands.move(lay.document, lay.book, lay.picked, way.x * step, way.y * step),
        `nudge-${lay.picked.join()}`
      );
    }
  }));
}

/** A direction on the cloth, as snug names it. */
export function snugWay(x: number, y: number): SnugWay {
  if (x !== 0) return x < 0 ? 'start' : 'end';
  return y < 0 ? 'near' : 'far';
}

const snugs: TableCommand[] = arrows.map((arrow) => ({
  id: `snug-${arrowWords[arrow]}`,
  label: `Snug ${arrowWords[arrow]}`,
  group: 'Snug',
  keys: [`Alt+${arrow}`],
  enabled: picked,
  perform: ({ lay, table }) => {
    const { x, y } = arrowOnCloth(table.view.lie, arrow);
    lay.do(snug(lay.document, lay.book, lay.picked, snugWay(x, y)));
  }
}));

const pans: TableCommand[] = arrows.map((arrow) => ({
  id: `pan-${arrowWords[arrow]}`,
  label: `Look further ${arrowWords[arrow]}`,
  group: 'Looking',
  keys: [`Mod+${arrow}`],
  repeats: true,
  enabled: always,
  perform: ({ table }) => {
    const step = 80;
    table.pan(
      arrow === 'ArrowLeft' ? step : arrow === 'ArrowRight' ? -step : 0,
      arrow === 'ArrowUp' ? step : arrow === 'ArrowDown' ? -step : 0
    );
  }
}));

/** Picks the piece after (or before) the one picked, in the order of the list. */
function step(by: 1 | -1): (desk: Desk) => void {
  return ({ lay, table }) => {
    const { pieces } = lay;
    if (pieces.length === 0) return lay.say('No piece is on the cloth yet.', true);
    const at = pieces.findIndex(({ id }) => id === lay.picked.at(-1));
    const next =
      pieces[at < 0 ? (by === 1 ? 0 : pieces.length - 1) : (at + by + pieces.length) % pieces.length]!;
    lay.pick(next.id, false);
    lay.say(describe(lay, next.id));
    void table;
  };
}

/** A placed piece in words: what it is and where it lies. */
export function describe(lay: OpenLay, id: string): string {
  const piece = lay.pieces.find((each) => each.id === id);
  if (!piece) return '';
  return lay.wordsFor(piece);
}

export const tableCommands: readonly TableCommand[] = [
  {
    id: 'place-next',
    label: 'Place the next piece of the Rail',
    group: 'Pieces',
    keys: ['P'],
    enabled: ({ lay }) => !lay.readOnly && lay.loose.length > 0,
    perform: ({ lay }) => lay.placeFirstFree(lay.loose[0]!)
  },
  {
    id: 'place-all',
    label: 'Place every piece of the Rail',
    group: 'Pieces',
    keys: ['Shift+P'],
    enabled: ({ lay }) => !lay.readOnly && lay.loose.length > 0,
    perform: ({ lay }) => lay.placeAll()
  },
  {
    id: 'settle',
    label: 'Settle the pieces',
    group: 'Pieces',
    keys: ['A'],
    enabled: writable,
    perform: ({ open }) => open('settle')
  },
  {
    id: 'to-rail',
    label: 'Back to the Rail',
    group: 'Pieces',
    keys: ['Delete', 'Backspace'],
    enabled: picked,
    perform: ({ lay }) => void lay.do(commands.toRail(lay.document, lay.book, lay.picked))
  },
  {
    id: 'flip',
    label: 'Flip',
    group: 'Pieces',
    keys: ['F'],
    enabled: picked,
    perform: ({ lay }) => void lay.do(commands.flip(lay.document, lay.book, lay.picked))
  },
  {
    id: 'lock',
    label: 'Lock or unlock',
    group: 'Pieces',
    keys: ['L'],
    enabled: picked,
    perform: ({ lay }) => {
      const all = lay.pickedPieces.every(({ placement }) => placement.locked);
      lay.do(commands.setLocked(lay.document, lay.book, lay.picked, !all));
    }
  },
  {
    id: 'copy-arrangement',
    label: 'Lay one garment as another lies',
    group: 'Pieces',
    keys: ['C'],
    enabled: ({ lay }) => !lay.readOnly && lay.document.garments.length > 1,
    perform: ({ open }) => open('copy')
  },
  {
    id: 'turn-left',
    label: 'Turn to the next allowed turn',
    group: 'Turning',
    keys: ['R'],
    enabled: picked,
    perform: ({ lay }) => void lay.do(commands.turnBySteps(lay.document, lay.book, lay.picked, 1))
  },
  {
    id: 'turn-right',
    label: 'Turn the other way',
    group: 'Turning',
    keys: ['Shift+R'],
    enabled: picked,
    perform: ({ lay }) => void lay.do(commands.turnBySteps(lay.document, lay.book, lay.picked, -1))
  },
  {
    id: 'tilt-left',
    label: 'Tilt by 0.1°, within the grain tolerance',
    group: 'Turning',
    keys: [','],
    repeats: true,
    enabled: picked,
    perform: ({ lay }) =>
      void lay.do(commands.turnFreely(lay.document, lay.book, lay.picked, 0.1), `tilt-${lay.picked.join()}`)
  },
  {
    id: 'tilt-right',
    label: 'Tilt by 0.1° the other way',
    group: 'Turning',
    keys: ['.'],
    repeats: true,
    enabled: picked,
    perform: ({ lay }) =>
      void lay.do(commands.turnFreely(lay.document, lay.book, lay.picked, -0.1), `tilt-${lay.picked.join()}`)
  },
  ...snugs,
  ...nudges(1, '', '1 mm'),
  ...nudges(10, 'Shift+', '10 mm'),
  {
    id: 'pick-next',
    label: 'Pick the next piece',
    group: 'Picking',
    keys: [']', 'N'],
    repeats: true,
    enabled: always,
    perform: step(1)
  },
  {
    id: 'pick-before',
    label: 'Pick the piece before',
    group: 'Picking',
    keys: ['[', 'Shift+N'],
    repeats: true,
    enabled: always,
    perform: step(-1)
  },
  {
    id: 'pick-garment',
    label: 'Pick the whole garment',
    group: 'Picking',
    keys: ['G'],
    enabled: ({ lay }) => lay.picked.length > 0,
    perform: ({ lay }) => {
      const garments = new Set(lay.pickedPieces.map(({ placement }) => placement.garment));
      lay.pickAll(
        [...garments].flatMap((garment) => commands.placementsOf(lay.document, garment)),
        false
      );
    }
  },
  {
    id: 'pick-all',
    label: 'Pick every piece on the cloth',
    group: 'Picking',
    keys: ['Mod+A'],
    enabled: always,
    perform: ({ lay }) =>
      lay.pickAll(
        lay.pieces.map(({ id }) => id),
        false
      )
  },
  {
    id: 'pick-several',
    label: 'Pick several: each touch adds',
    group: 'Picking',
    keys: ['S'],
    enabled: always,
    perform: ({ table, lay }) => {
      table.severalAtOnce = !table.severalAtOnce;
      lay.say(table.severalAtOnce ? 'Each touch adds a piece to those picked.' : 'A touch picks one piece.');
    }
  },
  {
    id: 'escape',
    label: 'Let go; pick nothing',
    group: 'Picking',
    keys: ['Escape'],
    enabled: always,
    perform: ({ table }) => table.escape()
  },
  {
    id: 'zoom-in',
    label: 'Nearer',
    group: 'Looking',
    keys: ['+', '='],
    repeats: true,
    enabled: always,
    perform: ({ table }) => table.zoom(1.25)
  },
  {
    id: 'zoom-out',
    label: 'Further away',
    group: 'Looking',
    keys: ['-'],
    repeats: true,
    enabled: always,
    perform: ({ table }) => table.zoom(0.8)
  },
  {
    id: 'fit',
    label: 'Show the whole cloth',
    group: 'Looking',
    keys: ['0'],
    enabled: always,
    perform: ({ table }) => table.fit()
  },
  {
    id: 'fit-picked',
    label: 'Show what is picked',
    group: 'Looking',
    keys: ['9'],
    enabled: ({ lay }) => lay.pieces.length > 0,
    perform: ({ table }) => table.fitPicked()
  },
  ...pans,
  {
    id: 'turn-table',
    label: 'Turn the table',
    group: 'Looking',
    keys: ['T'],
    enabled: always,
    perform: ({ table }) => table.turnTable()
  },
  {
    id: 'measure',
    label: 'Measure between two places',
    group: 'Looking',
    keys: ['M'],
    enabled: always,
    perform: ({ table }) => table.toggleMeasure()
  },
  {
    id: 'undo',
    label: 'Undo',
    group: 'Lay',
    keys: ['Mod+Z'],
    repeats: true,
    enabled: ({ lay }) => lay.canUndo && !lay.readOnly,
    perform: ({ lay }) => lay.undo()
  },
  {
    id: 'redo',
    label: 'Do again',
    group: 'Lay',
    keys: ['Mod+Shift+Z', 'Mod+Y'],
    repeats: true,
    enabled: ({ lay }) => lay.canRedo && !lay.readOnly,
    perform: ({ lay }) => lay.redo()
  },
  {
    id: 'save',
    label: 'Save now',
    group: 'Lay',
    keys: ['Mod+S'],
    enabled: writable,
    perform: ({ lay }) => {
      if (!lay.saving.unsaved) lay.say('Everything is saved.');
      else void lay.saveNow();
    }
  },
  {
    id: 'cloth',
    label: 'Cloth and blade: clearance, ends, side up',
    group: 'Lay',
    keys: ['E'],
    enabled: writable,
    perform: ({ open }) => open('cloth')
  },
  {
    id: 'spread',
    label: 'How the cloth is spread: open, folded, in plies',
    group: 'Lay',
    keys: ['D'],
    enabled: writable,
    perform: ({ open }) => open('spread')
  },
  {
    id: 'match',
    label: 'Stripes, checks and flaws',
    group: 'Lay',
    keys: ['J'],
    enabled: writable,
    perform: ({ open }) => open('match')
  },
  {
    id: 'keep',
    label: 'Keep a revision',
    group: 'Lay',
    keys: ['K'],
    enabled: writable,
    perform: ({ open }) => open('keep')
  },
  {
    id: 'list',
    label: 'List of pieces',
    group: 'Lay',
    keys: ['I'],
    enabled: always,
    perform: ({ open }) => open('pieces')
  },
  {
    id: 'help',
    label: 'This help',
    group: 'Lay',
    keys: ['?'],
    enabled: always,
    perform: ({ open }) => open('help')
  }
];

const byId = new Map(tableCommands.map((command) => [command.id, command]));

/** A command by its id. Throws for an id that does not exist. */
export function tableCommand(id: string): TableCommand {
  const command = byId.get(id);
  if (!command) throw new RangeError(`No command ${id}`);
  return command;
}

/** What of a key press is looked at. */
export interface KeyPress {
  readonly key: string;
  readonly ctrlKey: boolean;
  readonly metaKey: boolean;
  readonly shiftKey: boolean;
  readonly altKey: boolean;
  readonly repeat?: boolean;
}

/** Signs that need shift on some keyboards and none on others: shift is not looked at for them. */
const SIGNS = new Set(['?', '+', '=', '-', '[', ']', ',', '.', '0', '9']);

/** The press in the words of `keys`. */
export function keyName(press: KeyPress): string {
  const key = press.key.length === 1 ? press.key.toUpperCase() : press.key;
  const shift = press.shiftKey && !SIGNS.has(key) ? 'Shift+' : '';
  return `${press.ctrlKey || press.metaKey ? 'Mod+' : ''}${press.altKey ? 'Alt+' : ''}${shift}${key}`;
}

const byKey = new Map(tableCommands.flatMap((command) => command.keys.map((key) => [key, command] as const)));

/** The command of a key press; undefined when it has none, or when holding the key shall not repeat it. */
export function commandFor(press: KeyPress): TableCommand | undefined {
  const command = byKey.get(keyName(press));
  return press.repeat && !command?.repeats ? undefined : command;
}

const shown: Record<string, string> = {
  Mod: 'Ctrl',
  ArrowLeft: '←',
  ArrowRight: '→',
  ArrowUp: '↑',
  ArrowDown: '↓',
  Delete: 'Del',
  Escape: 'Esc'
};

/** A key as it is shown: `Ctrl Shift Z`. */
export function keyWords(key: string): string {
  if (key === '+') return '+';
  return key
    .split('+')
    .map((part) => shown[part] ?? part)
    .join(' ');
}
