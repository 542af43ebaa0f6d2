import { create } from 'qrcode';
import { rectangle, surface, type Mark } from './drawing';

/** A QR code as filled squares, `side` wide, its quiet zone included. */
export function qr(text: string, x: number, y: number, side: number): Mark[] {
  const { modules } = create(text, { errorCorrectionLevel: 'M' });
  const quiet = 4;
  const module = side / (modules.size + 2 * quiet);
  const runs: ReturnType<typeof rectangle>[] = [];
  for (let row = 0; row < modules.size; row++)
    for (let column = 0; column < modules.size; column++) {
      if (!modules.get(row, column)) continue;
      let end = column;
      while (end + 1 < modules.size && modules.get(row, end + 1)) end++;
      const top = y + side - (quiet + row) * module;
      runs.push(
        rectangle({
          minX: x + (quiet + column) * module,
          maxX: x + (quiet + end + 1) * module,
          minY: top - module,
          maxY: top
        })
      );
      column = end;
    }
  return [surface(runs, 0)];
}
