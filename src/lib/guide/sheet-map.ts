import { formatDecimal } from '$lib/units/length';
import type { ClothFrame } from './cloth-frame';
import { DeskPage, setTable, type Desk } from './desk-page';
import {
  line,
  pen,
  rectangle,
  ring,
  surface,
  words,
  wrapText,
  type Lettering,
  type Mark,
  type Page
} from './drawing';
import type { GuideInput } from './guide-input';
import type { LaidPiece, LonePanel } from './laid-piece';
import { onPaper } from './measure-words';
import { handWords } from './piece-drawing';
import { identity, notice } from './identity';
import { groups, printed, TAPED_UP_LIMIT, type TapedUpChecks, type Tiling } from './tiling';

/*
 * How the sheets go together: a map, and what a tape must read when they are taped up.
 */

/** Room for the targets' letters above and below the map. */
const LETTERS = 5;

/** The map of the sheets of the cloth. */
export function drawMap(
  input: GuideInput,
  frame: ClothFrame,
  pieces: readonly LaidPiece[],
  tiling: Tiling,
  checks: TapedUpChecks,
  desk: Desk,
  lettering: Lettering
): Page {
  const page = new DeskPage(desk, 'Map of the sheets', lettering);
  page.title('Map of the sheets', identity(input));
  const all = tiling.tiles.map((tile) => tile.window);
  const box = {
    minX: Math.min(...all.map((w) => w.minX)),
    minY: Math.min(...all.map((w) => w.minY)),
    maxX: Math.max(...all.map((w) => w.maxX)),
    maxY: Math.max(...all.map((w) => w.maxY))
  };
  const long = box.maxX - box.minX;
  const high = box.maxY - box.minY;
  // The words stand below a long cloth, beside a short one: whichever leaves the map larger.
  page.top -= LETTERS;
  const below = Math.min(page.width / long, (page.top - page.foot - 50) / high);
  const beside = Math.min((page.width - 96) / long, (page.top - page.foot - LETTERS) / high);
  const scale = Math.max(below, beside);
  const bottom = page.top - high * scale;
  const at = (x: number, y: number) => ({
    x: page.left + (x - box.minX) * scale,
    y: bottom + (y - box.minY) * scale
  });
  page.marks.push(...mapMarks(frame, pieces, tiling, checks, at, scale));
  if (beside > below) {
    const x = page.left + long * scale + 8;
    const width = page.right - x;
    const end = explain(page, { x, y: page.top, width }, input, frame, tiling);
    tapedUp(page, { x, y: end - 4, width }, input, checks);
  } else {
    const y = bottom - LETTERS - 3;
    explain(page, { x: page.left, y, width: page.width * 0.46 }, input, frame, tiling);
    tapedUp(page, { x: page.left + page.width * 0.52, y, width: page.width * 0.48 }, input, checks);
  }
  return page.done(notice(input));
}

/** A column of words: its upper left corner and width. */
interface Column {
  readonly x: number;
  readonly y: number;
  readonly width: number;
}

function mapMarks(
  frame: ClothFrame,
  pieces: readonly LaidPiece[],
  tiling: Tiling,
  checks: TapedUpChecks,
  at: (x: number, y: number) => { x: number; y: number },
  scale: number
): Mark[] {
  const marks: Mark[] = [];
  for (const piece of pieces) {
    const holes = piece.cutOuts.map((hole) => hole.map((p) => at(p.x, p.y)));
    marks.push(surface([piece.cut.map((p) => at(p.x, p.y)), ...holes], 0.9));
  }
  const { cloth } = frame;
  const a = at(cloth.minX, cloth.minY);
  const b = at(cloth.maxX, cloth.maxY);
  marks.push(line(rectangle({ minX: a.x, minY: a.y, maxX: b.x, maxY: b.y }), pen(0.2, [1.5, 1]), true));
  for (const tile of tiling.tiles) {
    const w = tile.window;
    const low = at(w.minX, w.minY);
    // Up to where the next sheet takes over, so that the map shows one line for a seam.
    const high = at(
      tile.column === tiling.columns - 1 ? w.maxX : w.minX + tiling.step.x,
      tile.row === tiling.rows - 1 ? w.maxY : w.minY + tiling.step.y
    );
    const box = { minX: low.x, minY: low.y, maxX: high.x, maxY: high.y };
    marks.push(line(rectangle(box), tile.blank ? pen(0.15, [0.6, 1.2]) : pen(0.3), true));
    if (tile.blank) continue;
    const size = Math.min((box.maxY - box.minY) * 0.4, (box.maxX - box.minX) / (tile.label.length * 0.95), 8);
    marks.push(
      words({ x: (box.minX + box.maxX) / 2, y: (box.minY + box.maxY) / 2 - size * 0.35 }, tile.label, size, {
        align: 'middle',
        weight: 'bold'
      })
    );
  }
  for (const { name, at: target } of checks.targets) {
    const place = at(target.x, target.y);
    const left = name === 'A' || name === 'D';
    const low = name === 'A' || name === 'B';
    marks.push(ring(place, Math.min(1.4, 8 * scale), pen(0.35)));
    marks.push(
      words({ x: place.x, y: low ? place.y - 5.4 : place.y + 2.6 }, name, 4, {
        weight: 'bold',
        align: left ? 'start' : 'end'
      })
    );
  }
  return marks;
}

/** What the map shows and how the sheets are joined; gives the height at which it ends. */
function explain(
  page: DeskPage,
  column: Column,
  input: GuideInput,
  frame: ClothFrame,
  tiling: Tiling
): number {
  const shown = printed(tiling).length;
  const left = tiling.tiles.length - shown;
  const islands = groups(tiling).length;
  let top = column.y;
  const put = (text: string, size: number, weight: 'regular' | 'bold' = 'regular'): void => {
    for (const one of wrapText(text, size, column.width, weight, page.lettering)) {
      page.put(one, column.x, top - size * 0.7, size, { weight });
      top -= size * 1.3;
    }
    top -= 1.5;
  };
  put(
    `${shown} ${shown === 1 ? 'sheet' : 'sheets'}${left > 0 ? `, ${left} blank ones left out (dotted)` : ''}`,
    4.6,
    'bold'
  );
  if (shown > 1)
    put(
      `Letters count from the near ${frame.near}, numbers from the zero line. Where a sheet has a neighbour at its left or ` +
        'below, trim its band off along the window. Lay it over that neighbour’s edge by ' +
        `${formatDecimal(tiling.rules.overlap, 1)} mm, so that rings and crosses meet, and tape it.`,
      3.6
    );
  put(
    'A sheet’s left band says where the lower left corner of its window lies: along the warp from the zero line, and ' +
      `across from the near ${frame.near}.`,
    3.6
  );
  if (islands > 1)
    put(`The sheets make ${islands} groups that don’t touch: place each by its corners.`, 3.6, 'bold');
  return top;
}

/** What a tape must read between the four targets. */
function tapedUp(
  page: DeskPage,
  { x, y: top, width }: Column,
  input: GuideInput,
  { checks }: TapedUpChecks
): void {
  let y = top - 3.4;
  page.put('Taped up, a tape must read', x, y, 4.6, { weight: 'bold' });
  y -= 6.8;
  for (const check of checks) {
    page.put(`${check.from} – ${check.to}`, x, y, 4.2, { weight: 'bold' });
    page.put(check.name, x + 16, y, 3.8);
    page.put(onPaper(check.length, input.lengthUnit), x + width, y, 4.6, { weight: 'bold', align: 'end' });
    y -= 6;
  }
  const limit = `More than ${TAPED_UP_LIMIT} mm off in any of them: do not cut. Take the joins apart, or print again at 100 %.`;
  for (const text of wrapText(limit, 3.6, width, 'bold', page.lettering)) {
    page.put(text, x, y, 3.6, { weight: 'bold' });
    y -= 4.8;
  }
}

/** One panel of a panels-only guide with its sheets. */
export interface PanelSheets {
  readonly panel: LonePanel;
  readonly tiling: Tiling;
  readonly checks: TapedUpChecks;
}

/** The list of panels with their sheets and checks. */
export function drawPanelList(
  input: GuideInput,
  panels: readonly PanelSheets[],
  desk: Desk,
  lettering: Lettering
): Page[] {
  const pages: Page[] = [];
  const begin = (): DeskPage => {
    const page = new DeskPage(desk, 'Panels', lettering);
    page.title('Panels and their sheets', identity(input));
    return page;
  };
  const first = begin();
  const rest = first.width - 12 - 16 - 4 * 24 - 34;
  const last = setTable(
    first,
    [
      { word: 'no.', width: 12, align: 'end', weight: 'bold' },
      { word: 'panel', width: rest * 0.55, align: 'start', weight: 'bold' },
      { word: 'for', width: rest * 0.45, align: 'start' },
      { word: 'pieces', width: 16, align: 'end', weight: 'bold' },
      { word: 'sheets', width: 34, align: 'end' },
      { word: 'A – B, mm', width: 24, align: 'end' },
      { word: 'A – D, mm', width: 24, align: 'end' },
      { word: 'A – C, mm', width: 24, align: 'end' },
      { word: 'B – D, mm', width: 24, align: 'end' }
    ],
    panels.map(({ panel, tiling, checks }) => {
      const shown = printed(tiling).length;
      return [
        String(panel.piece.number),
        [panel.piece.panel, handWords(panel.piece.hand)].filter(Boolean).join(', '),
        panel.cuts.map(({ garment, copies }) => (copies > 1 ? `${garment} × ${copies}` : garment)).join(', '),
        String(panel.piece.copies),
        shown === 1 ? '1' : `${shown} in ${tiling.rows} × ${tiling.columns}`,
        ...checks.checks.map((check) => formatDecimal(check.length, 1, true))
      ];
    }),
    (full) => {
      pages.push(full.done(notice(input)));
      return begin();
    }
  );
  last.put(
    `A to D are the rings in the corners of a panel’s sheets. More than ${TAPED_UP_LIMIT} mm off in any of them: do not cut.`,
    last.left,
    last.top - 6,
    3.6,
    { weight: 'bold', room: last.width }
  );
  return [...pages, last.done(notice(input))];
}
