import { describe, expect, it } from 'vitest';
import { firstFreePlace } from '$lib/client/first-free-place';
import { commandFor, keyName, keyWords, tableCommands } from '$lib/client/table-commands';
import { setStrip, settingsOf } from '$lib/client/strip-edits';
import { pieceAt, piecesWithin, tablePieces } from '$lib/client/table-pieces';
import { check } from '$lib/lay/check';
import { placeFromRail } from '$lib/lay/commands';
import { loose } from '$lib/lay/needs';
import { madeUpLay } from '../../bench/made-up-lay';

const press = (key: string, more: Partial<Parameters<typeof keyName>[0]> = {}) => ({
  key,
  ctrlKey: false,
  metaKey: false,
  shiftKey: false,
  altKey: false,
  ...more
});

describe('the commands of the table', () => {
  it('have ids and keys of their own', () => {
    const keys = tableCommands.flatMap((command) => command.keys);
    expect(new Set(keys).size).toBe(keys.length);
    expect(new Set(tableCommands.map(({ id }) => id)).size).toBe(tableCommands.length);
    expect(tableCommands.every(({ keys }) => keys.length > 0)).toBe(true);
  });

  it('are found by their keys on any keyboard', () => {
    expect(commandFor(press('z', { ctrlKey: true }))?.id).toBe('undo');
    expect(commandFor(press('Z', { metaKey: true, shiftKey: true }))?.id).toBe('redo');
    expect(commandFor(press('?', { shiftKey: true }))?.id).toBe('help');
    expect(commandFor(press('ArrowLeft', { altKey: true }))?.id).toBe('snug-left');
    expect(commandFor(press('ArrowLeft', { shiftKey: true }))?.id).toBe('nudge-10-left');
    expect(commandFor(press('q'))).toBeUndefined();
    expect(commandFor(press('f', { repeat: true }))).toBeUndefined();
    expect(commandFor(press('ArrowUp', { repeat: true }))?.id).toBe('nudge-1-up');
    expect(keyWords('Mod+Shift+Z')).toBe('Ctrl Shift Z');
  });
});

describe('placing without a pointer', () => {
  it('lays every piece clear of the others, inside the cloth', () => {
    const { document: start, panels } = madeUpLay(30, 40, 30);
    let document = start;
    let nth = 0;
    for (const piece of loose(start, panels)) {
      const id = `placed-${nth++}`;
      const edit = placeFromRail(document, panels, piece, { x: 0, y: 0 }, id);
      expect(edit.refused).toBeUndefined();
      const laid = firstFreePlace(edit.document!, panels, id);
      expect(laid.free).toBe(true);
      document = laid.document;
    }
    expect(document.placements).toHaveLength(30);
    expect(check(document, panels).findings).toEqual([]);
  });
});

describe('the piece under the pointer', () => {
  const { document, panels } = madeUpLay(20, 60);
  const pieces = tablePieces(document, panels);

  it('is found by its outline, and from a little beside it within reach', () => {
    const piece = pieces[3]!;
    const { x, y } = piece.placement;
    expect(pieceAt(pieces, { x, y }, 0)?.id).toBe(piece.id);
    const corner = { x: piece.box.minX + 0.5, y: piece.box.minY + 0.5 };
    expect(pieceAt([piece], corner, 0)).toBeNull();
    expect(pieceAt([piece], corner, 60)?.id).toBe(piece.id);
  });

  it('is in the band when any of it is', () => {
    const piece = pieces[0]!;
    const all = piecesWithin(pieces, { minX: -1, minY: -1, maxX: 1e5, maxY: 1e5 });
    expect(all).toHaveLength(pieces.length);
    const sliver = { ...piece.box, maxX: piece.box.minX + 2 };
    expect(piecesWithin([piece], sliver)).toHaveLength(1);
    const inside = {
      minX: piece.placement.x - 1,
      maxX: piece.placement.x + 1,
      minY: piece.placement.y - 1,
      maxY: piece.placement.y + 1
    };
    expect(piecesWithin([piece], inside)).toHaveLength(1);
  });
});

describe('the cloth of a lay', () => {
  it('is set as one edit, and turned over changes every hand', () => {
    const { document, panels } = madeUpLay(10, 24);
    const now = settingsOf(document.strip);
    expect(setStrip(document, now).refused).toBeDefined();
    const wide = setStrip(document, { ...now, clearance: 30, endAllowance: { start: 40, end: 20 } });
    expect(wide.document!.strip).toMatchObject({ clearance: 30, endAllowance: { start: 40, end: 20 } });
    expect(check(wide.document!, panels).readings.clothToBuy.start).toBe(40);
    expect(check(document, panels).findings).toEqual([]);
    expect(check(wide.document!, panels).findings.map(({ kind }) => kind)).toContain('clearance');
    const over = setStrip(document, { ...now, sideUp: 'wrong' });
    const kinds = check(over.document!, panels).findings.map(({ kind }) => kind);
    expect(kinds.filter((kind) => kind === 'wrong-hand')).toHaveLength(10);
  });
});
