import { LIMITS, ReadingRefused } from './limits';

/** One entity: its type and its group codes in order, vertices of a polyline and attributes of an INSERT below it. */
export interface DxfEntity {
  type: string;
  codes: [number, string][];
  children: DxfEntity[];
}

export interface DxfBlock {
  name: string;
  codes: [number, string][];
  entities: DxfEntity[];
}

export interface DxfFile {
  header: Map<string, [number, string][]>;
  /** Layers that are switched off or frozen. */
  hiddenLayers: Set<string>;
  blocks: Map<string, DxfBlock>;
  entities: DxfEntity[];
}

/** The group codes of a file in order. Every code is a whole number on a line of its own, its value on the next. */
function pairs(text: string): [number, string][] {
  if (/^[ \w]{0,40}Binary DXF/.test(text) || text.includes('\u0000'))
    throw new ReadingRefused(
      'binary-dxf',
      'This is a binary DXF file. Save it as ASCII (text) DXF and upload it again.'
    );
  const lines = text.split(/\r\n|\n|\r/);
  const found: [number, string][] = [];
  let i = 0;
  while (i < lines.length && lines[i]!.trim() === '') i += 1;
  for (; i < lines.length; i += 2) {
    const written = lines[i]!.trim();
    if (written === '' && lines.slice(i, i + 50).every((line) => line.trim() === '')) break;
    if (!/^-?\d{1,5}$/.test(written))
      throw new ReadingRefused(
        'not-dxf',
        `The file is not a DXF file that can be read: line ${i + 1} should hold a group code, it holds '${written.slice(0, 40)}'.`
      );
    if (i + 1 >= lines.length)
      throw new ReadingRefused(
        'cut-short',
        `The file ends in the middle: line ${i + 1} has a group code without a value.`
      );
    found.push([Number(written), lines[i + 1]!]);
    if (found.length > LIMITS.pairs)
      throw new ReadingRefused(
        'too-many-pairs',
        `The file has more than ${LIMITS.pairs.toLocaleString('en')} values. Keep only the panels and upload it again.`
      );
  }
  return found;
}

/** What a POLYLINE or an INSERT with attributes gathers until its SEQEND. */
const GATHERS: Readonly<Record<string, string>> = { POLYLINE: 'VERTEX', INSERT: 'ATTRIB' };

/**
 * The sections of an ASCII DXF file (release 12 and later) that hold drawings: header, layers, blocks, entities.
 * Everything else is passed over. Throws ReadingRefused when it is not such a file.
 */
export function parseDxfFile(text: string): DxfFile {
  const codes = pairs(text.replace(/^\uFEFF/, ''));
  const file: DxfFile = { header: new Map(), hiddenLayers: new Set(), blocks: new Map(), entities: [] };
  let i = 0;
  let sections = 0;
  let ended = false;
  while (i < codes.length) {
    const [code, value] = codes[i]!;
    i += 1;
    if (code !== 0) continue;
    if (value.trim() === 'EOF') {
      ended = true;
      break;
    }
    if (value.trim() !== 'SECTION') continue;
    sections += 1;
    const name = codes[i]?.[0] === 2 ? codes[i]![1].trim().toUpperCase() : '';
    i += 1;
    const end = sectionEnd(codes, i);
    if (name === 'HEADER') readHeader(codes, i, end, file);
    else if (name === 'TABLES') readLayers(codes, i, end, file);
    else if (name === 'BLOCKS') readBlocks(codes, i, end, file);
    else if (name === 'ENTITIES') file.entities.push(...readEntities(codes, i, end));
    i = end;
  }
  if (sections === 0)
    throw new ReadingRefused('not-dxf', 'The file has no SECTION: it is not a DXF drawing.');
  if (!ended && codes.length > 0 && !sectionClosed(codes))
    throw new ReadingRefused(
      'cut-short',
      'The file ends in the middle of a section: it was not saved or sent completely.'
    );
  return file;
}

function sectionEnd(codes: readonly [number, string][], from: number): number {
  for (let i = from; i < codes.length; i += 1)
    if (codes[i]![0] === 0 && codes[i]![1].trim() === 'ENDSEC') return i;
  return codes.length;
}

function sectionClosed(codes: readonly [number, string][]): boolean {
  const last = codes.findLast(([code]) => code === 0);
  return last?.[1].trim() === 'ENDSEC';
}

function readHeader(codes: readonly [number, string][], from: number, end: number, file: DxfFile): void {
  let values: [number, string][] | null = null;
  for (let i = from; i < end; i += 1) {
    const [code, value] = codes[i]!;
    if (code === 9) {
      values = [];
      file.header.set(value.trim().toUpperCase(), values);
    } else values?.push([code, value]);
  }
}

function readLayers(codes: readonly [number, string][], from: number, end: number, file: DxfFile): void {
  let layer: { name: string; hidden: boolean } | null = null;
  const keep = (): void => {
    if (layer?.hidden) file.hiddenLayers.add(layer.name);
  };
  for (let i = from; i < end; i += 1) {
    const [code, value] = codes[i]!;
    if (code === 0) {
      keep();
      layer = value.trim() === 'LAYER' ? { name: '', hidden: false } : null;
    } else if (layer && code === 2) layer.name = value.trim();
    else if (layer && code === 62 && Number(value) < 0) layer.hidden = true;
    else if (layer && code === 70 && (Number(value) & 1) === 1) layer.hidden = true;
  }
  keep();
}

function readBlocks(codes: readonly [number, string][], from: number, end: number, file: DxfFile): void {
  let i = from;
  while (i < end) {
    const [code, value] = codes[i]!;
    i += 1;
    if (code !== 0 || value.trim() !== 'BLOCK') continue;
    const head: [number, string][] = [];
    while (i < end && codes[i]![0] !== 0) {
      head.push(codes[i]!);
      i += 1;
    }
    let stop = i;
    while (stop < end && !(codes[stop]![0] === 0 && codes[stop]![1].trim() === 'ENDBLK')) stop += 1;
    const name = head.find(([c]) => c === 2)?.[1].trim() ?? '';
    if (!file.blocks.has(name))
      file.blocks.set(name, { name, codes: head, entities: readEntities(codes, i, stop) });
    i = stop;
  }
}

function readEntities(codes: readonly [number, string][], from: number, end: number): DxfEntity[] {
  const entities: DxfEntity[] = [];
  let gathering: DxfEntity | null = null;
  let current: DxfEntity | null = null;
  for (let i = from; i < end; i += 1) {
    const [code, value] = codes[i]!;
    if (code !== 0) {
      current?.codes.push([code, value]);
      continue;
    }
    const type = value.trim().toUpperCase();
    current = { type, codes: [], children: [] };
    if (gathering && GATHERS[gathering.type] === type) gathering.children.push(current);
    else if (gathering && type === 'SEQEND') gathering = null;
    else {
      entities.push(current);
      gathering = type in GATHERS ? current : null;
    }
  }
  return entities;
}

/** The first value of a code as text. */
export function textOf(entity: { codes: readonly [number, string][] }, code: number): string | undefined {
  return entity.codes.find(([c]) => c === code)?.[1].trim();
}

/** The first value of a code as a number; `otherwise` when it is missing, NaN when it is not a number. */
export function numberOf(
  entity: { codes: readonly [number, string][] },
  code: number,
  otherwise: number
): number {
  const text = textOf(entity, code);
  return text === undefined ? otherwise : toNumber(text);
}

/** A decimal number as DXF writes it; NaN for anything else (also for hexadecimal, Infinity or an empty line). */
export function toNumber(text: string): number {
  return /^\s*[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?\s*$/.test(text)
    ? Number(text.replace(/[dD]/, 'e'))
    : NaN;
}
