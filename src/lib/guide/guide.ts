import { boundingBox, growBox } from '$lib/geometry/polygon';
import type { Box, Outline } from '$lib/geometry/point';
import { clothFrame, drawFrame, plies, type ClothFrame } from './cloth-frame';
import type { Desk } from './desk-page';
import type { Lettering, Mark, Page } from './drawing';
import { paperOf, type GuideChoice } from './guide-choice';
import type { GuideInput } from './guide-input';
import { layPieces, lonePanels, type LaidPiece } from './laid-piece';
import { drawOverview } from './overview';
import { papers } from './papers';
import { PdfWriter, type GuideFonts } from './pdf';
import { drawPiece, handWords, type LabelWords } from './piece-drawing';
import { drawMap, drawPanelList, type PanelSheets } from './sheet-map';
import { drawSheet, type SheetWords, type Spot } from './sheet';
import { identity } from './identity';
import { drawTicket } from './ticket';
import { joinMarks, printed, tapedUpChecks, tileOnPaper, tileWhole, type Tile, type Tiling } from './tiling';

/*
 * The cutting guide, put together: ticket, overview, map, sheets.
 */

/** More sheets than this are refused: nobody tapes them up. */
export const MOST_SHEETS = 1500;

/** A guide that can't be made as chosen; the message says what to choose instead. */
export class GuideRefusal extends Error {
  override readonly name = 'GuideRefusal';
}

export interface GuideProgress {
  readonly done: number;
  readonly of: number;
  /** What is being drawn: 'Ticket', 'Sheet B3'. */
  readonly page: string;
}

export interface Guide {
  readonly bytes: Uint8Array;
  readonly pages: number;
  readonly sheets: number;
  /** Code points of letters that were printed as boxes. */
  readonly missing: readonly string[];
}

/** Pages drawn before the first sheet, and the sheets drawn one at a time. */
interface Plan {
  readonly front: readonly Page[];
  readonly sheets: number;
  readonly draw: () => Generator<Page>;
}

/**
 * Makes the PDF of a guide at true size. `tell` is called before each page.
 * @throws GuideRefusal when nothing lies on the cloth, or the choice takes too many sheets.
 */
export async function makeGuide(
  input: GuideInput,
  choice: GuideChoice,
  fonts: GuideFonts,
  tell: (progress: GuideProgress) => void = () => {}
): Promise<Guide> {
  const writer = await PdfWriter.open(
    fonts,
    `Cutting guide, order ${input.orderNumber}, ${input.lay}, revision ${input.revision.number}`,
    input.made.at
  );
  // Every name is looked at first, so that the ticket can say which letters are missing.
  for (const text of namesIn(input)) writer.width(text, 1, 'regular');
  const missing = writer.missing.map(({ codePoint }) => codePoint);
  const plan = planGuide(input, choice, missing, writer);
  const total = plan.front.length + plan.sheets;
  let done = 0;
  const add = (page: Page): void => {
    tell({ done, of: total, page: page.name });
    writer.add(page);
    done++;
  };
  plan.front.forEach(add);
  for (const page of plan.draw()) add(page);
  tell({ done, of: total, page: 'Writing the file' });
  return { bytes: await writer.bytes(), pages: done, sheets: plan.sheets, missing };
}

/** Every text of people's own making that the guide prints. */
function namesIn(input: GuideInput): string[] {
  const shapes = Object.values(input.panels).map((panel) => panel.shape);
  return [
    input.studio,
    input.orderNumber,
    input.shortName,
    input.lay,
    input.cloth,
    input.revision.name,
    ...input.document.garments.map((garment) => garment.label),
    ...shapes.map((shape) => shape.name),
    ...shapes.flatMap((shape) => [...shape.drillHoles, ...shape.internalLines].map(({ note }) => note))
  ];
}

function planGuide(
  input: GuideInput,
  choice: GuideChoice,
  missing: readonly string[],
  lettering: Lettering
): Plan {
  const pieces = layPieces(input.document, input.panels);
  if (pieces.length === 0)
    throw new GuideRefusal('No piece lies on the cloth in this revision, so there is nothing to print.');
  const lengthUsed = Math.max(0, ...pieces.map((piece) => piece.box.maxX));
  const frame = clothFrame(input.document.strip, pieces, lengthUsed);
  const desk = deskOf(input, choice);
  const context: Context = { input, choice, pieces, frame, desk, missing, lettering };
  return choice.kind === 'panels' ? planPanels(context) : planCloth(context);
}

interface Context {
  readonly input: GuideInput;
  readonly choice: GuideChoice;
  readonly pieces: readonly LaidPiece[];
  readonly frame: ClothFrame;
  readonly desk: Desk;
  readonly missing: readonly string[];
  readonly lettering: Lettering;
}

/** What the pages before the sheets are printed on: A4, or Letter where the studio or the sheets are in inches. */
function deskOf(input: GuideInput, choice: GuideChoice): Desk {
  const inches = choice.paper === 'Letter' || choice.paper === 'Tabloid' || choice.paper?.startsWith('ASME');
  const { name, width, height } =
    inches || (choice.paper === undefined && input.lengthUnit === 'in') ? papers.Letter : papers.A4;
  return { name, width, height: height! };
}

function sideways({ name, width, height }: Desk): Desk {
  return { name, width: height, height: width };
}

function labelWords(input: GuideInput): LabelWords {
  return {
    order: input.orderNumber,
    singlePly: plies(input.document.strip) === 1,
    bothWays: input.document.strip.nap === 'none'
  };
}

function refuseTooMany(sheets: number): void {
  if (sheets > MOST_SHEETS)
    throw new GuideRefusal(
      `That would be ${sheets} sheets; at most ${MOST_SHEETS} are made. Choose a larger paper, or the whole cloth on a roll.`
    );
}

function tileAs(choice: GuideChoice, extent: Box, outlines: readonly Outline[]): Tiling {
  const paper = paperOf(choice);
  return paper ? tileOnPaper(extent, outlines, paper, choice) : tileWhole(extent, outlines, choice);
}

function planCloth({ input, choice, pieces, frame, desk, missing, lettering }: Context): Plan {
  const tiling = tileAs(
    choice,
    frame.extent,
    pieces.map((piece) => piece.cut)
  );
  const shown = printed(tiling);
  refuseTooMany(shown.length);
  const checks = tapedUpChecks(tiling, frame.extent);
  const joins = joinMarks(tiling);
  const spots: Spot[] = [
    ...drawFrame(frame, input.lengthUnit).map(spotOfMark),
    ...pieces.map((piece) => spotOf(piece, labelWords(input), lettering))
  ];
  const say: SheetWords = {
    identity: identity(input),
    strip: input.document.strip,
    released: input.revision.released !== null,
    near: frame.near
  };
  const paper =
    choice.kind === 'whole'
      ? 'the cloth’s own size'
      : `${paperOf(choice)!.name} ${tiling.page.width > tiling.page.height ? 'landscape' : 'portrait'}`;
  const wide = sideways(desk);
  return {
    front: [
      ...drawTicket(
        input,
        frame,
        pieces,
        { deskPaper: desk.name, paper, sheets: shown.length, missing },
        desk,
        lettering
      ),
      ...drawOverview(input, frame, pieces, wide, lettering),
      drawMap(input, frame, pieces, tiling, checks, wide, lettering)
    ],
    sheets: shown.length,
    *draw() {
      for (const tile of shown) yield drawSheet(tile, tiling, spots, joins, checks, say, lettering);
    }
  };
}

/** A piece with the box of everything that belongs to it. */
function spotOf(piece: LaidPiece, label: LabelWords, lettering: Lettering): Spot {
  const notches = piece.notches.flatMap(({ sew, edge, tip }) => [sew, edge, tip]);
  return {
    box: boundingBox([...piece.cut, ...notches, piece.grain.from, piece.grain.to]),
    marks: drawPiece(piece, label, lettering)
  };
}

/** How far words along an edge reach from where they start, at most. */
const WORDS_REACH = 120;

/** One mark of the frame by itself, so that a sheet draws only those of its own stretch. */
function spotOfMark(mark: Mark): Spot {
  switch (mark.kind) {
    case 'stroke':
      return { box: boundingBox(mark.points), marks: [mark] };
    case 'surface':
      return { box: boundingBox(mark.outlines.flat()), marks: [mark] };
    case 'words':
      return { box: growBox(boundingBox([mark.at]), WORDS_REACH), marks: [mark] };
  }
}

/** Air around a panel on its own page, so that its line does not lie on the window's edge. */
const PANEL_AIR = 6;

function planPanels({ input, choice, pieces, frame, desk, missing, lettering }: Context): Plan {
  const panels = lonePanels(input.document, input.panels).map((panel): PanelSheets => {
    const extent = growBox(panel.piece.box, PANEL_AIR);
    const tiling = tileAs(choice, extent, [panel.piece.cut]);
    return { panel, tiling, checks: tapedUpChecks(tiling, extent) };
  });
  const sheets = panels.reduce((sum, { tiling }) => sum + printed(tiling).length, 0);
  refuseTooMany(sheets);
  const wide = sideways(desk);
  const paper = paperOf(choice)?.name ?? 'each panel’s own size';
  return {
    front: [
      ...drawTicket(input, frame, pieces, { deskPaper: desk.name, paper, sheets, missing }, desk, lettering),
      ...drawOverview(input, frame, pieces, wide, lettering),
      ...drawPanelList(input, panels, wide, lettering)
    ],
    sheets,
    *draw() {
      for (const { panel, tiling, checks } of panels) {
        const { piece } = panel;
        const spots = [spotOf(piece, labelWords(input), lettering)];
        const joins = joinMarks(tiling);
        const say: SheetWords = {
          identity: `${piece.panel}${handWords(piece.hand) && `, ${handWords(piece.hand)}`} · ${identity(input)}`,
          strip: input.document.strip,
          released: input.revision.released !== null,
          near: null
        };
        const name = (tile: Tile): string =>
          printed(tiling).length === 1 ? String(piece.number) : `${piece.number}-${tile.label}`;
        for (const tile of printed(tiling))
          yield drawSheet(tile, tiling, spots, joins, checks, say, lettering, name(tile));
      }
    }
  };
}
