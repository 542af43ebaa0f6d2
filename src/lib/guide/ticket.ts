import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import type { Box } from '$lib/geometry/point';
import { formatDecimal } from '$lib/units/length';
import { hasBothSides, lengthsSpread, spreadWords } from '$lib/cloth/spread';
import {
  napWords,
  repeatWords,
  plies,
  sideUpWords,
  givenWords,
  shrinkingWords,
  type ClothFrame
} from './cloth-frame';
import { DeskPage, setTable, type Desk } from './desk-page';
import { line, pen, rectangle, surface, words, wrapText, type Lettering, type Page } from './drawing';
import type { GuideInput } from './guide-input';
import { identity, notice, shortHash } from './identity';
import type { LaidPiece } from './laid-piece';
import { onTape } from './measure-words';
import { listPieces, pieceList } from './piece-list';
import { qr } from './qr-code';

/*
 * The first page: which order, which cloth, what to mind; and whether the printer prints at true size.
 */

/** Side of the two squares, mm: 100 mm and 4 in. */
export const CHECK_SQUARES = [100, 101.6] as const;

export interface TicketWords {
  /** The paper of the pages before the sheets: 'A4'. */
  readonly deskPaper: string;
  /** The paper of the sheets: 'A4 portrait', 'the cloth's own size'. */
  readonly paper: string;
  readonly sheets: number;
  /** Code points of letters that the fonts lack. */
  readonly missing: readonly string[];
}

const CAUTIONS = [
  'Scan the code first: cut only what it calls current.',
  'Blades: close or cover them after every cut, cut away from yourself, keep the fingers clear of the ruler’s edge.',
  'Powered cutters: guard down to the cloth, cable clear of the lay, power off before anything is adjusted. ' +
    'Wear the hand protection that the maker names: knitted gloves can be caught by a moving blade.',
  'Heavy rolls: a trolley, or two people.',
  'Local rules, the maker’s manual and trained people come before this sheet.'
];

/** The ticket, and further pages where the piece list is long. */
export function drawTicket(
  input: GuideInput,
  frame: ClothFrame,
  pieces: readonly LaidPiece[],
  say: TicketWords,
  desk: Desk,
  lettering: Lettering
): Page[] {
  const page = new DeskPage(desk, 'Ticket', lettering);
  head(page, input);
  facts(page, input, frame, pieces, say);
  const list = pieceList(pieces);
  const squaresTop = page.foot + CHECK_SQUARES[1] + 5;
  const rest = listPieces(page, list, squaresTop);
  checkSquares(page, input, say);
  cautions(page, input, say, squaresTop);
  const letters = missingPages(input, say.missing, desk, lettering);
  const pages = [page.done(notice(input))];
  if (rest.length === 0) return [...pages, ...letters];
  const begin = (): DeskPage => {
    const next = new DeskPage(desk, 'Pieces', lettering);
    next.title('Pieces, continued', identity(input));
    return next;
  };
  const last = setTable(
    begin(),
    [
      { word: 'pieces', width: 18, align: 'end', weight: 'bold' },
      { word: 'panel', width: 78, align: 'start', weight: 'bold' },
      { word: 'hand', width: 26, align: 'start' },
      { word: 'garment', width: page.width - 122, align: 'start' }
    ],
    rest.map((one) => [String(one.count), one.panel, one.hand, one.garment]),
    (before) => {
      pages.push(before.done(notice(input)));
      return begin();
    }
  );
  return [...pages, last.done(notice(input)), ...letters];
}

function head(page: DeskPage, input: GuideInput): void {
  page.put(input.studio, page.left, page.top - 3.4, 4.6, { room: page.width - 60 });
  page.put(`Made ${input.made.words}`, page.right, page.top - 3.4, 3.6, { align: 'end' });
  page.top -= 16.5;
  page.put(`Order ${input.orderNumber}`, page.left, page.top, 14, { weight: 'bold' });
  status(page, input);
  page.top -= 8.5;
  const garments = [...new Set(input.document.garments.map((garment) => garment.label))];
  const text = [input.shortName, garments.join(', ')].filter(Boolean).join(' · ');
  const lines = wrapText(text, 5.6, page.width, 'bold', page.lettering);
  const most = 2;
  lines.slice(0, most).forEach((shown, i) => {
    const cut = i === most - 1 && lines.length > most ? `${shown} …` : shown;
    page.put(cut, page.left, page.top, 5.6, { weight: 'bold', room: page.width });
    page.top -= 6.6;
  });
  page.top += 3;
  page.rule(0.5);
  page.top -= 2;
}

/** Released or not, in a box at the right: white on black while it must not be cut. */
function status(page: DeskPage, input: GuideInput): void {
  const { released } = input.revision;
  const text = released === null ? 'NOT RELEASED' : `Released ${released}`;
  const size = released === null ? 7 : 5.2;
  const wide = page.lettering.width(text, size, 'bold') + 8;
  const box: Box = {
    minX: page.right - wide,
    maxX: page.right,
    minY: page.top - 2.4,
    maxY: page.top + size * 0.7 + 2.4
  };
  page.marks.push(
    released === null ? surface([rectangle(box)], 0) : line(rectangle(box), pen(0.5), true),
    words({ x: page.right - wide / 2, y: page.top }, text, size, {
      weight: 'bold',
      align: 'middle',
      shade: released === null ? 1 : 0
    })
  );
}

function facts(
  page: DeskPage,
  input: GuideInput,
  frame: ClothFrame,
  pieces: readonly LaidPiece[],
  say: TicketWords
): void {
  const { strip } = input.document;
  const { readings } = input;
  const length = (mm: number): string => onTape(mm, input.lengthUnit);
  const percent = (share: number | null): string =>
    share === null ? 'nothing placed' : `${formatDecimal(share * 100, 1, true)} %`;
  const { start, end } = strip.endAllowance;
  const loose = readings.pieces.loose;
  const count = pieces.reduce((sum, piece) => sum + piece.copies, 0);
  const rows: [string, string][] = [
    ['Lay', input.lay],
    ['Cloth', input.cloth],
    ['Width', `${length(strip.fullWidth)}, usable ${length(strip.usableWidth)}`],
    ['Up', sideUpWords(strip)],
    ...(strip.given ? [['Cut from', givenWords(strip.given)] satisfies [string, string]] : []),
    ...shrinkingWords(strip).map((words): [string, string] => ['Shrinking', words]),
    ['Spread', spreadWords(strip)],
    ['Nap', napWords(strip)],
    ...matchRows(input, length),
    ['Length of the lay', length(frame.lengthUsed)],
    [
      'Cloth it takes',
      `${length(frame.lengthUsed + start + end)}, ends of ${length(start)} and ${length(end)} included`
    ],
    ['Efficiency', `${percent(readings.efficiency)}${loose > 0 ? ' so far' : ''}`],
    ['Pieces', `${count}${loose > 0 ? `, and ${loose} not on the cloth yet` : ''}`],
    ['Revision', [String(input.revision.number), input.revision.name].filter(Boolean).join(' · ')],
    ['Sheets', `${say.sheets}, ${say.paper}`]
  ];
  const row = 5.7;
  const code = 39;
  const top = page.top;
  rows.forEach(([word, value], i) => {
    const y = top - 4.2 - i * row;
    page.put(word, page.left, y, 3.4);
    page.putSmaller(value, page.left + 31, y, 4.2, page.width - 31 - code - 8);
  });
  page.marks.push(...qr(input.scanAddress, page.right - code, top - 2 - code, code));
  const middle = page.right - code / 2;
  page.put('Scan: is this the', middle, top - code - 6.5, 3.4, { align: 'middle' });
  page.put('current revision?', middle, top - code - 10.7, 3.4, { align: 'middle' });
  page.put(shortHash(input.revision.hash), middle, top - code - 16.5, 4.4, {
    align: 'middle',
    weight: 'bold'
  });
  page.top = top - rows.length * row - 2.5;
  page.rule();
  page.top -= 1;
}

/** What to mind of repeat, matching and flaws; nothing where the cloth has none. */
function matchRows(input: GuideInput, length: (mm: number) => string): [string, string][] {
  const { strip, rules } = input.document;
  const rows: [string, string][] = [];
  const repeat = repeatWords(strip, length);
  if (repeat) rows.push(['Repeat', repeat]);
  if (repeat && rules.matchGroups.length > 0)
    rows.push([
      'Matching',
      `${rules.matchGroups.length} ${rules.matchGroups.length === 1 ? 'group' : 'groups'} of points, within ${length(rules.matchTolerance)}${hasBothSides(strip) || lengthsSpread(strip) > 1 ? '; pin all layers line on line' : ''}`
    ]);
  const flaws = flawsAsLaid(strip);
  if (flaws.length > 0) {
    const near = flaws
      .slice(0, 3)
      .map(({ x, y, note }) => `${length(x)} / ${length(y)}${note ? ` ${note}` : ''}`);
    rows.push([
      flaws.length === 1 ? 'Flaw' : 'Flaws',
      `${near.join(', ')}${flaws.length > 3 ? ` and ${flaws.length - 3} more` : ''} (along / across)`
    ]);
  }
  return rows;
}

/** Two squares that share their lower left corner, and inside them what to set in the print dialogue. */
function checkSquares(page: DeskPage, input: GuideInput, say: TicketWords): void {
  const x = page.left;
  const y = page.foot;
  const [small, large] = CHECK_SQUARES;
  for (const side of [large, small])
    page.marks.push(line(rectangle({ minX: x, minY: y, maxX: x + side, maxY: y + side }), pen(0.2), true));
  page.put('4 in', x + large / 2, y + large + 1, 3, { align: 'middle' });
  page.put('100 mm', x + small / 2, y + small - 4, 3, { align: 'middle' });
  page.marks.push(
    words({ x: x + small - 1.8, y: y + small / 2 }, '100 mm', 3, { align: 'middle', turn: 90 })
  );
  page.marks.push(words({ x: x + large + 3.4, y: y + large / 2 }, '4 in', 3, { align: 'middle', turn: 90 }));
  let top = y + small - 13;
  const put = (text: string, size: number, weight: 'regular' | 'bold'): void => {
    for (const shown of wrapText(text, size, small - 18, weight, page.lettering)) {
      page.put(shown, x + 8, top, size, { weight });
      top -= size * 1.35;
    }
    top -= size * 0.5;
  };
  put('In the print dialogue', 5, 'bold');
  put('Scale 100 %, also called “actual size”.', 4.2, 'regular');
  put('No “fit to page”, no shrinking, no borderless enlargement.', 4.2, 'regular');
  put(`First pages: ${say.deskPaper}. Sheets: ${say.paper}. One side only.`, 4.2, 'regular');
  top -= 2;
  put('Then measure both squares', 5, 'bold');
  put(
    'Across and up. Out by half a millimetre here is 5 mm on a metre: do not cut by it. Set the printer right and print again.',
    4.2,
    'regular'
  );
  const { hash } = input.revision;
  const half = hash.length / 2;
  page.put('This revision’s hash', x + 8, y + 13, 3);
  page.put(hash.slice(0, half), x + 8, y + 9, 3);
  page.put(hash.slice(half), x + 8, y + 5, 3);
}

function cautions(page: DeskPage, input: GuideInput, say: TicketWords, squaresTop: number): void {
  const x = page.left + CHECK_SQUARES[1] + 9;
  const width = page.right - x;
  let top = squaresTop - 8;
  const put = (text: string, size: number, weight: 'regular' | 'bold', gap: number): void => {
    for (const shown of wrapText(text, size, width, weight, page.lettering)) {
      page.put(shown, x, top, size, { weight, room: width });
      top -= size * 1.3;
    }
    top -= gap;
  };
  put('Mind', 5, 'bold', 1);
  const own = [
    ...(plies(input.document.strip) === 1
      ? ['Single ply: drill holes are marked with thread or chalk, never pierced.']
      : []),
    ...CAUTIONS
  ];
  for (const text of own) put(text, 3.5, 'regular', 1.3);
  if (say.missing.length > 0) put(missingWords(say.missing), 3.5, 'bold', 0);
}

/** As many missing letters as the ticket has room for; the others are listed on a page of their own. */
const MISSING_HERE = 9;

function missingWords(missing: readonly string[]): string {
  const here = missing.length <= MISSING_HERE ? missing : missing.slice(0, MISSING_HERE - 1);
  const more = missing.length - here.length;
  return `Letters that our fonts lack, printed as a box: ${here.join(', ')}${
    more > 0 ? `, and ${more} more on a page that follows` : ''
  }.`;
}

/** Every missing letter, where the ticket itself has no room for all. */
function missingPages(
  input: GuideInput,
  missing: readonly string[],
  desk: Desk,
  lettering: Lettering
): Page[] {
  if (missing.length <= MISSING_HERE) return [];
  const pages: Page[] = [];
  const begin = (): DeskPage => {
    const page = new DeskPage(desk, 'Letters', lettering);
    page.title('Letters printed as a box', identity(input));
    return page;
  };
  const across = 7;
  const rows = Array.from({ length: Math.ceil(missing.length / across) }, (_, i) =>
    missing.slice(i * across, (i + 1) * across)
  );
  const first = begin();
  const columns = Array.from({ length: across }, () => ({
    word: '',
    width: first.width / across,
    align: 'start' as const
  }));
  const last = setTable(first, columns, rows, (full) => {
    pages.push(full.done(notice(input)));
    return begin();
  });
  return [...pages, last.done(notice(input))];
}
