import { describe, expect, it } from 'vitest';
import { clothFrame, drawFlawsAndEdge, repeatWords, sideUpWords } from '$lib/guide/cloth-frame';
import { layPieces, lonePanels } from '$lib/guide/laid-piece';
import { alongEdge, handWords } from '$lib/guide/piece-drawing';
import { pen } from '$lib/guide/drawing';
import { back, spread } from '../lay/folded-workroom';
import { bookOf, ell, lay, panel, placement } from '../lay/workroom';

const sleeve = panel('ell', ell, { paired: true, howMany: 2 });
const book = bookOf(back(), sleeve);
const cloth = spread(
  { kind: 'lengthwise', sideUp: 'wrong', depth: 400 },
  {
    repeat: {
      along: { size: 80, offset: 0, symmetric: true },
      across: { size: 50, offset: 0, symmetric: false }
    },
    flaws: [{ id: 'f', x: 500, y: 300, along: 20, across: 10, radius: 2, note: 'slub' }]
  }
);
const document = lay(book, [placement('b', 'back'), placement('s', 'ell', { x: 400, y: 60 })], cloth);

describe('a guide on folded cloth', () => {
  it('shows the half with its fold edge, which is never drawn as a cut', () => {
    const [half, pair] = layPieces(document, book);
    expect(half).toMatchObject({ onFold: true, copies: 1, hand: 'either' });
    expect(half!.box).toEqual({ minX: 0, maxX: 300, minY: 0, maxY: 100 });
    const cut = alongEdge(half!, half!.cut, pen(0.5));
    if (cut.kind !== 'stroke') throw new Error('A cut line is a stroke');
    expect(cut.closed).toBe(false);
    expect(cut.points).toHaveLength(half!.cut.length);
    const ends = [cut.points[0]!, cut.points.at(-1)!];
    expect(ends.map(({ y }) => y)).toEqual([0, 0]);
    expect(ends.map(({ x }) => x).sort((a, b) => a - b)).toEqual([0, 280]);
    expect(pair).toMatchObject({ onFold: false, copies: 2, hand: 'pair' });
    expect(handWords(pair!.hand)).toBe('left + right');
    expect(alongEdge(pair!, pair!.cut, pen(0.5))).toMatchObject({ closed: true });
  });

  it('prints a lone panel as the half, too', () => {
    const [half] = lonePanels(document, book);
    expect(half!.piece.onFold).toBe(true);
    expect(half!.piece.box).toEqual({ minX: 0, maxX: 300, minY: 0, maxY: 100 });
  });

  it('draws fold, borders, the lines of the repeat and flaws, and says them', () => {
    const frame = clothFrame(cloth, [], 800);
    expect(frame).toMatchObject({ near: 'fold', far: 'selvedge', usableWidth: 600 });
    expect(frame.cloth.minY).toBe(0);
    expect(frame.borders.map(({ y, words }) => [y, words])).toEqual([
      [400, 'selvedge of the upper ply'],
      [420, 'single layer from here']
    ]);
    // 11 lines along the warp 0 … 800 (and the end), 13 across, 2 borders, a flaw of three strokes.
    expect(drawFlawsAndEdge(frame)).toHaveLength(11 + 13 + 2 + 3);
    expect(sideUpWords(cloth)).toBe('WRONG SIDE UP · FOLD: gives L + R');
    expect(repeatWords(cloth, (mm) => `${mm} mm`)).toBe(
      '80 mm along, first line 0 mm from the zero line; 50 mm across, first line 0 mm from the near edge; one way, no mirror image matches'
    );
  });
});
