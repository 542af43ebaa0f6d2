import { formatDay } from '$lib/units/days';
import type { LengthUnit } from '$lib/units/length';
import type { Millimetres, Minor } from '$lib/units/measure';
import { formatMoney } from '$lib/units/money';
import { shareDigits, workDigits, type BasisPoints, type TaxMode } from '$lib/units/share';
import { line, pen, words, wrapText, type Lettering, type Mark, type Page, type Weight } from './drawing';
import { onTape } from './measure-words';
import { papers } from './papers';

/*
 * A quote as the client reads it, and its pages. The document is what is kept: the same bytes make the same paper.
 */

export interface QuoteDocument {
  readonly schema: 1;
  readonly studio: { readonly name: string; readonly letterhead: string };
  readonly order: number;
  /** Counts the quotes of the order. */
  readonly version: number;
  readonly client: string;
  readonly currency: string;
  readonly lengthUnit: LengthUnit;
  /** The day it was made, and the last day on which it can be agreed. */
  readonly day: string;
  readonly validUntil: string;
  readonly garments: readonly {
    readonly name: string;
    readonly label: string;
    readonly quantity: number;
  }[];
  readonly cloths: readonly {
    readonly name: string;
    readonly roles: string;
    readonly width: Millimetres;
    /** Length to buy, ends and reserve included; null where it was priced by hand without a lay. */
    readonly length: Millimetres | null;
    /** Whether the client brings it. */
    readonly own: boolean;
    readonly amount: Minor;
  }[];
  readonly trims: readonly { readonly words: string; readonly amount: Minor }[];
  readonly extras: readonly { readonly words: string; readonly amount: Minor }[];
  readonly minutes: number;
  /** The price less cloth, trims and extras; null when the price was set below them: then no line shows an amount. */
  readonly making: Minor | null;
  readonly tax: { readonly mode: TaxMode; readonly rate: BasisPoints; readonly amount: Minor };
  readonly net: Minor;
  readonly total: Minor;
  readonly deposit: Minor;
  readonly fittings: number;
  readonly due: string | null;
  /** Of the studio's own wording. */
  readonly dates: string;
  readonly alterations: string;
  readonly exclusions: string;
  readonly terms: string;
  /** That local consumer law applies. */
  readonly law: string;
}

export interface QuoteLine {
  readonly words: string;
  readonly aside: string;
  readonly amount: Minor | null;
}

/** What the price is made of, as lines: their amounts add up to the price before an added tax. */
export function quoteLines(quote: QuoteDocument): QuoteLine[] {
  const shown = (amount: Minor) => (quote.making === null ? null : amount);
  return [
    ...quote.cloths.map(({ name, roles, width, length, own, amount }) => ({
      words: name,
      aside: [
        roles,
        `${onTape(width, quote.lengthUnit)} wide`,
        ...(length === null ? [] : [`${onTape(length, quote.lengthUnit)} with ends and reserve`]),
        ...(own ? ['brought by you'] : [])
      ].join(', '),
      amount: own ? null : shown(amount)
    })),
    ...quote.trims.map(({ words, amount }) => ({ words, aside: 'Trim', amount: shown(amount) })),
    ...quote.extras.map(({ words, amount }) => ({ words, aside: '', amount: shown(amount) })),
    {
      words: 'Making',
      aside: quote.minutes > 0 ? `about ${workDigits(quote.minutes)} hours of work` : '',
      amount: quote.making
    }
  ];
}

/** 'Tax 20 %', 'of it tax 20 %'; null without tax. */
export function taxWords({ tax }: Pick<QuoteDocument, 'tax'>): string | null {
  if (tax.mode === 'none') return null;
  const rate = `${shareDigits(tax.rate)} %`;
  return tax.mode === 'added' ? `Tax ${rate}` : `of which tax ${rate}`;
}

/** What is promised beside the price: headings with their words, those that say nothing left out. */
export function quoteParts(quote: QuoteDocument): { title: string; text: string }[] {
  return [
    {
      title: 'Fittings',
      text:
        quote.fittings === 0
          ? 'None.'
          : `${quote.fittings} ${quote.fittings === 1 ? 'fitting is' : 'fittings are'} included.`
    },
    {
      title: 'Dates',
      text: [quote.due === null ? '' : `Ready by ${formatDay(quote.due)}.`, quote.dates]
        .filter(Boolean)
        .join(' ')
    },
    { title: 'Alterations', text: quote.alterations },
    { title: 'Not included', text: quote.exclusions },
    { title: 'Terms', text: quote.terms },
    { title: 'Your rights', text: quote.law }
  ].filter(({ text }) => text.trim() !== '');
}

const MARGIN: Millimetres = 22;
const TYPE: Millimetres = 3.6;
const LEADING: Millimetres = 5.2;

/** Marks down the pages, a new page where one is full. */
class Flow {
  readonly pages: Mark[][] = [[]];
  readonly width: Millimetres;
  y: Millimetres;

  constructor(
    private readonly paper: { readonly width: Millimetres; readonly height: Millimetres },
    private readonly lettering: Lettering
  ) {
    this.width = paper.width - 2 * MARGIN;
    this.y = paper.height - MARGIN;
  }

  get right(): Millimetres {
    return this.paper.width - MARGIN;
  }

  /** Makes sure that `height` fits on the page. */
  room(height: Millimetres): void {
    if (this.y - height >= MARGIN + 8) return;
    this.pages.push([]);
    this.y = this.paper.height - MARGIN;
  }

  put(
    text: string,
    x: Millimetres,
    more: { size?: Millimetres; weight?: Weight; align?: 'start' | 'end'; shade?: number } = {}
  ): void {
    const { size = TYPE, ...rest } = more;
    this.pages.at(-1)!.push(words({ x, y: this.y }, text, size, rest));
  }

  /** Words over as many lines as they need; line breaks of the text are kept. */
  paragraph(
    text: string,
    more: { size?: Millimetres; weight?: Weight; width?: Millimetres; x?: Millimetres; shade?: number } = {}
  ): void {
    const { size = TYPE, weight = 'regular', width = this.width, x = MARGIN, shade = 0 } = more;
    for (const part of text.split('\n'))
      for (const row of wrapText(part, size, width, weight, this.lettering)) {
        this.room(LEADING);
        this.y -= size === TYPE ? LEADING : size * 1.4;
        this.put(row, x, { size, weight, shade });
      }
  }

  rule(): void {
    this.y -= 2.4;
    this.pages.at(-1)!.push(
      line(
        [
          { x: MARGIN, y: this.y },
          { x: this.right, y: this.y }
        ],
        pen(0.2)
      )
    );
  }

  /** A row with an amount at its right end. */
  row(text: string, amount: string, more: { aside?: string; weight?: Weight } = {}): void {
    const { aside = '', weight = 'regular' } = more;
    const rows = wrapText(text, TYPE, this.width - 40, weight, this.lettering);
    this.room(LEADING * (rows.length + (aside ? 1 : 0)) + 1);
    rows.forEach((part, i) => {
      this.y -= LEADING;
      this.put(part, MARGIN, { weight });
      if (i === 0) this.put(amount, this.right, { weight, align: 'end' });
    });
    if (aside) this.paragraph(aside, { size: 3, shade: 0.35, width: this.width - 40 });
  }
}

/** The pages of a quote, on A4 or Letter. */
export function quotePages(
  quote: QuoteDocument,
  lettering: Lettering,
  paperName: 'A4' | 'Letter' = 'A4'
): Page[] {
  const { width, height } = papers[paperName] as { width: number; height: number };
  const flow = new Flow({ width, height }, lettering);
  const money = (amount: Minor | null) => (amount === null ? '' : formatMoney(amount, quote.currency));

  flow.paragraph(quote.studio.name, { size: 6.4, weight: 'bold' });
  if (quote.studio.letterhead.trim()) flow.paragraph(quote.studio.letterhead, { size: 3, shade: 0.35 });
  flow.y -= 10;
  flow.paragraph(`Quote ${quote.order}.${quote.version}`, { size: 5.2, weight: 'bold' });
  flow.y -= 1;
  flow.paragraph(`For ${quote.client}`);
  flow.paragraph(`${formatDay(quote.day)}, valid until ${formatDay(quote.validUntil)}`);
  flow.y -= 6;

  for (const { name, label, quantity } of quote.garments)
    flow.paragraph(`${quantity} × ${[name, label].filter(Boolean).join(', ')}`, { weight: 'bold' });
  flow.rule();
  for (const { words: text, aside, amount } of quoteLines(quote)) flow.row(text, money(amount), { aside });
  flow.rule();
  const tax = taxWords(quote);
  if (quote.tax.mode === 'added' && tax) {
    flow.row('Price before tax', money(quote.net));
    flow.row(tax, money(quote.tax.amount));
  }
  flow.y -= 0.6;
  flow.row('Total', money(quote.total), { weight: 'bold' });
  if (quote.tax.mode === 'included' && tax) flow.row(tax, money(quote.tax.amount));
  if (quote.deposit > 0) {
    flow.y -= 1.5;
    flow.row('Deposit, before cloth is bought', money(quote.deposit));
    flow.row('Balance', money(quote.total - quote.deposit));
  }
  flow.y -= 4;
  for (const { title, text } of quoteParts(quote)) {
    flow.room(3 * LEADING);
    flow.y -= 2.5;
    flow.paragraph(title, { weight: 'bold' });
    flow.paragraph(text);
  }

  return flow.pages.map((marks, i) => ({
    width,
    height,
    name: `Page ${i + 1}`,
    layers: [
      {
        origin: { x: 0, y: 0 },
        scale: 1,
        window: null,
        marks: [
          ...marks,
          words(
            { x: MARGIN, y: MARGIN - 8 },
            `${quote.studio.name}, quote ${quote.order}.${quote.version}`,
            2.8,
            { shade: 0.35 }
          ),
          words({ x: width - MARGIN, y: MARGIN - 8 }, `${i + 1} of ${flow.pages.length}`, 2.8, {
            align: 'end',
            shade: 0.35
          })
        ]
      }
    ]
  }));
}
