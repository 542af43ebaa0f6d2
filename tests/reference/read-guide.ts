import { getDocument, OPS } from 'pdfjs-dist/legacy/build/pdf.mjs';

/*
 * An independent reading of a guide: what another PDF program (pdf.js) finds on its pages, in millimetres of paper.
 * Nothing of the product is used here.
 */

/** ISO 32000-1, 8.3.2.3: the default unit of user space is 1/72 inch. */
const MM_PER_UNIT = 25.4 / 72;

export interface ReadPoint {
  x: number;
  y: number;
}

export interface ReadPath {
  readonly points: ReadPoint[];
  readonly closed: boolean;
  readonly painted: 'stroked' | 'filled';
  /** Line width, mm. */
  readonly width: number;
  readonly dashed: boolean;
  /** The clip rectangle in force, mm of paper; null for the whole page. */
  readonly clip: { minX: number; minY: number; maxX: number; maxY: number } | null;
}

export interface ReadText {
  readonly text: string;
  readonly x: number;
  readonly y: number;
}

export interface ReadPage {
  readonly width: number;
  readonly height: number;
  readonly paths: ReadPath[];
  readonly texts: ReadText[];
}

type Matrix = [number, number, number, number, number, number];

function times(a: Matrix, b: Matrix): Matrix {
  return [
    a[0] * b[0] + a[2] * b[1],
    a[1] * b[0] + a[3] * b[1],
    a[0] * b[2] + a[2] * b[3],
    a[1] * b[2] + a[3] * b[3],
    a[0] * b[4] + a[2] * b[5] + a[4],
    a[1] * b[4] + a[3] * b[5] + a[5]
  ];
}

/** Every page of the file. */
export async function readGuide(bytes: Uint8Array): Promise<ReadPage[]> {
  const document = await getDocument({ data: bytes.slice(), verbosity: 0, useSystemFonts: false }).promise;
  const pages: ReadPage[] = [];
  for (let n = 1; n <= document.numPages; n++) {
    const page = await document.getPage(n);
    const [x0, y0, x1, y1] = page.view as [number, number, number, number];
    const operators = await page.getOperatorList();
    const texts = (await page.getTextContent()).items.flatMap((item) =>
      'str' in item && item.str.trim() !== ''
        ? [{ text: item.str, x: item.transform[4] * MM_PER_UNIT, y: item.transform[5] * MM_PER_UNIT }]
        : []
    );
    pages.push({
      width: (x1 - x0) * page.userUnit * MM_PER_UNIT,
      height: (y1 - y0) * page.userUnit * MM_PER_UNIT,
      paths: pathsOf(operators.fnArray, operators.argsArray),
      texts
    });
    page.cleanup();
  }
  await document.destroy();
  return pages;
}

interface State {
  matrix: Matrix;
  width: number;
  dashed: boolean;
  clip: ReadPath['clip'];
}

function pathsOf(names: number[], allArgs: unknown[][]): ReadPath[] {
  const paths: ReadPath[] = [];
  const stack: State[] = [];
  let state: State = { matrix: [1, 0, 0, 1, 0, 0], width: 1, dashed: false, clip: null };
  let clipNext = false;
  const painting: Record<number, ReadPath['painted']> = {
    [OPS.stroke]: 'stroked',
    [OPS.closeStroke]: 'stroked',
    [OPS.fill]: 'filled',
    [OPS.eoFill]: 'filled'
  };
  names.forEach((name, i) => {
    const args = allArgs[i]!;
    switch (name) {
      case OPS.save:
        stack.push({ ...state });
        break;
      case OPS.restore:
        state = stack.pop()!;
        break;
      case OPS.transform:
        state.matrix = times(state.matrix, [...args] as unknown as Matrix);
        break;
      case OPS.setLineWidth:
        state.width = args[0] as number;
        break;
      case OPS.setDash:
        state.dashed = (args[0] as number[]).length > 0;
        break;
      case OPS.clip:
      case OPS.eoClip:
        clipNext = true;
        break;
      case OPS.constructPath: {
        const [paint, data] = args as [number, [Float32Array | null]];
        const found = subpaths(data[0], state.matrix);
        if (clipNext) {
          const all = found.flatMap(({ points }) => points);
          state.clip = {
            minX: Math.min(...all.map((p) => p.x)),
            minY: Math.min(...all.map((p) => p.y)),
            maxX: Math.max(...all.map((p) => p.x)),
            maxY: Math.max(...all.map((p) => p.y))
          };
          clipNext = false;
        }
        const painted = painting[paint];
        if (!painted) break;
        const scale = Math.hypot(state.matrix[0], state.matrix[1]) * MM_PER_UNIT;
        for (const { points, closed } of found)
          paths.push({
            points,
            closed: closed || painted === 'filled',
            painted,
            width: state.width * scale,
            dashed: state.dashed,
            clip: state.clip
          });
        break;
      }
    }
  });
  return paths;
}

function subpaths(data: Float32Array | null, m: Matrix): { points: ReadPoint[]; closed: boolean }[] {
  const found: { points: ReadPoint[]; closed: boolean }[] = [];
  if (!data) return found;
  const at = (x: number, y: number): ReadPoint => ({
    x: (m[0] * x + m[2] * y + m[4]) * MM_PER_UNIT,
    y: (m[1] * x + m[3] * y + m[5]) * MM_PER_UNIT
  });
  for (let i = 0; i < data.length;) {
    const code = data[i++];
    if (code === 0) found.push({ points: [at(data[i]!, data[i + 1]!)], closed: false });
    else if (code === 1) found.at(-1)!.points.push(at(data[i]!, data[i + 1]!));
    else if (code === 4) {
      found.at(-1)!.closed = true;
      continue;
    } else throw new Error(`A guide has straight lines only; found a path operator ${code}`);
    i += 2;
  }
  return found;
}
