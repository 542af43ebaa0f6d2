import type { Sheet, SheetStep } from '$lib/drafting/construction';
import { totalOff, type DraftResult, type Level } from '$lib/drafting/draft';
import { flatten, type Path } from '$lib/geometry/path';
import type { Box, Point } from '$lib/geometry/point';
import { boundingBox } from '$lib/geometry/polygon';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import type { Millimetres } from '$lib/units/measure';
import { DeskPage, setTable, type Desk, type TableColumn } from './desk-page';
import {
  line,
  pen,
  ring,
  words,
  wrapText,
  type Layer,
  type Lettering,
  type Mark,
  type Page
} from './drawing';
import { papers } from './papers';
import { PdfWriter, type GuideFonts } from './pdf';

/*
 * The drafting sheet on paper: what went in and what came out on the first page, then every step with its formula, its number and the
 * figure so far, six to a page. For reading, never to scale.
 */

export interface DraftingSheetInput {
  readonly studio: string;
  readonly draft: string;
  /** Whom or what it was drafted for: a client's name, a size. */
  readonly body: string;
  /** When that was measured, as it shall be read; null for a size of a table. */
  readonly measured: string | null;
  readonly unit: LengthUnit;
  /** UTC milliseconds: the date in the file. */
  readonly at: number;
  readonly choices: readonly { readonly label: string; readonly value: string }[];
  readonly result: DraftResult;
}

const DESK: Desk = { name: 'A4', width: papers.A4.width, height: papers.A4.height! };
const COLUMNS = 2;
const ROWS = 3;

/** The file. */
export async function draftingSheetPdf(input: DraftingSheetInput, fonts: GuideFonts): Promise<Uint8Array> {
  const writer = await PdfWriter.open(fonts, `${input.draft}: drafting sheet`, input.at);
  for (const page of draftingSheetPages(input, writer)) writer.add(page);
  return writer.bytes();
}

/** Its pages. */
export function draftingSheetPages(input: DraftingSheetInput, lettering: Lettering): Page[] {
  return [...summary(input, lettering), ...steps(input, lettering)];
}

const foot = ({ studio }: DraftingSheetInput): string => `${studio} · for reading, not to scale`;
const identity = ({ body, measured }: DraftingSheetInput): string =>
  measured === null ? body : `${body}, measured ${measured}`;
/** In the studio's unit, the other one beside it. */
const both = (mm: Millimetres, unit: LengthUnit): string =>
  `${formatLength(mm, unit, { decimals: unit === 'cm' ? 1 : undefined })} (${unit === 'cm' ? formatLength(mm, 'in') : formatLength(mm, 'cm', { decimals: 1 })})`;

const levelWords: Record<Level, string> = {
  bust: 'Bust',
  underBust: 'Under-bust',
  waist: 'Waist',
  hip: 'Hip',
  hem: 'Hem',
  topEdge: 'Top edge',
  armhole: 'Armhole',
  upperArm: 'Upper arm'
};

function summary(input: DraftingSheetInput, lettering: Lettering): Page[] {
  const pages: Page[] = [];
  const begin = (title: string): DeskPage => {
    const page = new DeskPage(DESK, 'Drafting sheet', lettering);
    page.title(title, identity(input));
    return page;
  };
  let page = begin(input.draft);
  const next = (full: DeskPage): DeskPage => {
    pages.push(full.done(foot(input)));
    return begin(`${input.draft}, continued`);
  };
  const { result, unit } = input;
  const table = (columns: readonly TableColumn[], rows: readonly (readonly string[])[]): void => {
    if (rows.length === 0) return;
    // A heading alone at the foot of a page is lost.
    if (page.top - page.foot < 30) page = next(page);
    page = setTable(page, columns, rows, next);
    page.top -= 5;
  };
  const text = (what: string, weight: 'regular' | 'bold' = 'regular'): void => {
    for (const one of wrapText(what, 3.5, page.width, weight, lettering)) {
      if (page.top - page.foot < 6) page = next(page);
      page.put(one, page.left, page.top - 3.5, 3.5, { weight });
      page.top -= 5;
    }
    page.top -= 1.5;
  };

  for (const caution of result.cautions) text(caution, 'bold');
  for (const warning of result.warnings) text(`Look at: ${warning}`);
  table(
    [
      { word: 'in the formulas', width: 28, align: 'start', weight: 'bold' },
      { word: 'is', width: 100, align: 'start' },
      { word: 'length', width: page.width - 128, align: 'end' }
    ],
    result.sheet.names.map(({ name, words: meaning, mm }) => [name, meaning, both(mm, unit)])
  );
  table(
    [
      { word: 'choice', width: 110, align: 'start' },
      { word: 'taken', width: page.width - 110, align: 'end' }
    ],
    input.choices.map(({ label, value }) => [label, value])
  );
  table(
    [
      { word: 'finished girth', width: 34, align: 'start', weight: 'bold' },
      { word: 'body', width: 38, align: 'end' },
      { word: 'ease', width: 38, align: 'end' },
      { word: 'opening', width: 38, align: 'end' },
      { word: 'finished', width: page.width - 148, align: 'end' }
    ],
    result.totals.map((total) => [
      levelWords[total.level] + (Math.abs(totalOff(total) ?? 0) > 10 ? ' (look)' : ''),
      total.body === null ? 'not measured' : both(total.body, unit),
      both(total.ease, unit),
      both(total.gap, unit),
      both(total.finished, unit)
    ])
  );
  table(
    [
      { word: 'seam', width: 60, align: 'start', weight: 'bold' },
      { word: 'one side', width: 42, align: 'end' },
      { word: 'other side', width: 42, align: 'end' },
      { word: 'off', width: page.width - 144, align: 'end' }
    ],
    result.walks.map(({ seam, lengthA, lengthB, difference }) => [
      seam.name,
      both(lengthA, unit),
      both(lengthB, unit),
      `${formatDecimal(difference, 1, true)} mm`
    ])
  );
  table(
    [
      { word: 'bones', width: 20, align: 'end', weight: 'bold' },
      { word: 'where', width: 90, align: 'start' },
      { word: 'length each', width: page.width - 110, align: 'end' }
    ],
    result.bones.map(({ name, count, length }) => [String(count), name, both(length, unit)])
  );
  table(
    [
      { word: 'to buy', width: 20, align: 'end', weight: 'bold' },
      { word: 'what', width: 90, align: 'start' },
      { word: 'length each', width: page.width - 110, align: 'end' }
    ],
    result.supplies.map(({ name, count, length }) => [
      String(count),
      name,
      length === null ? '' : both(length, unit)
    ])
  );
  pages.push(page.done(foot(input)));
  return pages;
}

/** Six steps to a page, each with the figure so far; the whole figure comes last. */
function steps(input: DraftingSheetInput, lettering: Lettering): Page[] {
  const { sheet } = input.result;
  const frame = frameOf(sheet);
  const cells: (SheetStep | null)[] = [...sheet.steps, null];
  const perPage = COLUMNS * ROWS;
  const pages: Page[] = [];
  for (let first = 0; first < cells.length; first += perPage) {
    const page = new DeskPage(DESK, 'Steps', lettering);
    page.title(`${input.draft}, steps`, identity(input));
    const width = page.width / COLUMNS;
    const height = (page.top - page.foot) / ROWS;
    cells.slice(first, first + perPage).forEach((step, i) => {
      const left = page.left + (i % COLUMNS) * width;
      const top = page.top - Math.floor(i / COLUMNS) * height;
      cell(page, input, step, frame, {
        minX: left,
        maxX: left + width - 4,
        minY: top - height + 4,
        maxY: top
      });
    });
    pages.push(page.done(foot(input)));
  }
  return pages;
}

function cell(
  page: DeskPage,
  { result, unit }: DraftingSheetInput,
  step: SheetStep | null,
  frame: Box,
  box: Box
): void {
  const middle = box.minX + (box.maxX - box.minX) * 0.52;
  const room = box.maxX - middle - 2;
  const title = step ? `${step.number}. ${step.title}${step.ourReading ? ' ~' : ''}` : 'The whole figure';
  let y = box.maxY - 5;
  const put = (text: string, size: number, weight: 'regular' | 'bold'): void => {
    for (const one of wrapText(text, size, room, weight, page.lettering)) {
      page.put(one, middle, y, size, { weight, room });
      y -= size * 1.35;
    }
    y -= 1.5;
  };
  put(title, 4, 'bold');
  if (step) put(step.formula, 3.3, 'regular');
  if (step?.value)
    put(
      step.value.kind === 'length'
        ? `= ${both(step.value.mm, unit)}`
        : `= ${formatDecimal(step.value.degrees, 1)}°`,
      3.6,
      'bold'
    );
  if (step?.ourReading) put('~ our reading of the hand method', 2.8, 'regular');
  const drawn = figure(result.sheet, step?.number ?? null, frame, { ...box, maxX: middle - 3 });
  if (drawn) page.drawings.push(drawn);
}

/** The box round all marks of a sheet, y down. */
function frameOf(sheet: Sheet): Box {
  const points = sheet.steps.flatMap(({ marks }) =>
    marks.flatMap((mark) => (mark.kind === 'point' ? [mark.at] : flatten(mark.path, 1)))
  );
  return points.length === 0 ? { minX: 0, minY: 0, maxX: 1, maxY: 1 } : boundingBox(points);
}

/** The figure after a step, all of it with null; what the step drew is heavy and named. Null where nothing is drawn yet. */
function figure(sheet: Sheet, upTo: number | null, frame: Box, box: Box): Layer | null {
  const inset = 3;
  const scale = Math.min(
    (box.maxX - box.minX - 2 * inset) / Math.max(frame.maxX - frame.minX, 1),
    (box.maxY - box.minY - 2 * inset) / Math.max(frame.maxY - frame.minY, 1)
  );
  // Widths and letters are meant on the paper; the layer scales everything.
  const on = (size: Millimetres): Millimetres => size / scale;
  const flip = ({ x, y }: Point): Point => ({ x, y: -y });
  const stroke = (path: Path, width: Millimetres, dash: readonly number[]): Mark =>
    line(flatten(path, on(0.05)).map(flip), pen(on(width), dash.map(on)));
  const marks = sheet.steps
    .filter(({ number }) => upTo === null || number <= upTo)
    .flatMap((step) =>
      step.marks.flatMap((mark): Mark[] => {
        const now = step.number === upTo;
        if (mark.kind === 'point')
          return [
            ring(flip(mark.at), on(now ? 0.7 : 0.4), pen(on(now ? 0.4 : 0.2))),
            ...(now || upTo === null
              ? [words({ x: mark.at.x + on(1), y: -mark.at.y + on(1) }, mark.name, on(now ? 3 : 2.2))]
              : [])
          ];
        if (mark.use === 'line') return [stroke(mark.path, now ? 0.7 : 0.35, [])];
        return [stroke(mark.path, now ? 0.4 : 0.12, mark.use === 'guide' ? [1.5, 1] : [])];
      })
    );
  if (marks.length === 0) return null;
  return {
    origin: {
      x: box.minX + inset - frame.minX * scale,
      y: box.maxY - inset + frame.minY * scale
    },
    scale,
    window: box,
    marks
  };
}
