import { readDxf } from './dxf';
import { LIMITS, ReadingRefused } from './limits';
import type { Reading } from './reading';
import { readSvg } from './svg';

/** The kinds of file that are read as panels. */
export type PanelFileType = 'svg' | 'dxf';

/** What a file is, by its first characters, whatever its name says; null for anything else. */
export function panelFileType(bytes: Uint8Array): PanelFileType | null {
  const start = decode(bytes.subarray(0, 4096))
    .replace(/^\uFEFF/, '')
    .trimStart();
  if (start.startsWith('<')) return 'svg';
  if (/^(?:999\s*[\r\n][^\r\n]*[\r\n]+\s*)*0\s*\r?[\n\r]\s*SECTION/i.test(start)) return 'dxf';
  if (/^[ \w]{0,40}Binary DXF/.test(start)) return 'dxf';
  // A DXF file that starts oddly still starts with a group code on a line of its own.
  return /^-?\d{1,4}\s*[\r\n]/.test(start) ? 'dxf' : null;
}

/** Text from bytes: by its byte order mark, else UTF-8, else the Western code page that older files are in. */
function decode(bytes: Uint8Array): string {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return new TextDecoder('utf-16le').decode(bytes);
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return new TextDecoder('utf-16be').decode(bytes);
  const utf8 = new TextDecoder('utf-8').decode(bytes);
  return utf8.includes('\uFFFD') ? new TextDecoder('windows-1252').decode(bytes) : utf8;
}

/**
 * Reads an uploaded file by what it holds. Throws ReadingRefused with words for the person when it is too large,
 * neither SVG nor DXF, or can't be read.
 */
export function readPanelFile(bytes: Uint8Array): Reading {
  if (bytes.length === 0) throw new ReadingRefused('empty', 'The file is empty.');
  if (bytes.length > LIMITS.bytes)
    throw new ReadingRefused(
      'too-large',
      `The file has ${(bytes.length / 1024 / 1024).toFixed(1)} MB; ${LIMITS.bytes / 1024 / 1024} MB are allowed.`
    );
  const type = panelFileType(bytes);
  if (type === 'svg') return readSvg(decode(bytes));
  if (type === 'dxf') return readDxf(decode(bytes));
  throw new ReadingRefused(
    'unknown-type',
    'The file is neither an SVG nor a DXF drawing, whatever its name says.'
  );
}
