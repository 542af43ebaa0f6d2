import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { canRedo, canUndo, endGesture, mapHistory, record, redo, startHistory, undo } from '$lib/lay/history';
import { bookOf, lay, panel, placement, rectangle } from './workroom';
import { runs } from '../../runs';

const book = bookOf(panel('front', rectangle(100, 100)));
const state = (x: number) => lay(book, [placement('a', 'front', { x })]);
const edit = (x: number) => ({ document: state(x), said: `to ${x}` });
const at = (history: ReturnType<typeof startHistory>) => history.present.document.placements[0]!.x;

describe('undo and redo', () => {
  it('walk back and forth through every step, however many', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 1, max: 1000 }), { maxLength: 300 }), (xs) => {
        let history = startHistory(state(0));
        for (const x of xs) history = record(history, edit(x));
        const states = [0, ...xs];
        for (let i = states.length - 1; i > 0; i--) {
          expect(at(history)).toBe(states[i]);
          history = undo(history).history;
        }
        expect(canUndo(history)).toBe(false);
        expect(undo(history).history).toBe(history);
        for (const x of xs) {
          history = redo(history).history;
          expect(at(history)).toBe(x);
        }
        expect(canRedo(history)).toBe(false);
      }),
      { seed: 16, numRuns: runs(40) }
    );
  });

  it('says what it undid', () => {
    const history = record(startHistory(state(0)), edit(5));
    expect(undo(history).said).toBe('Undone: to 5');
    expect(redo(undo(history).history).said).toBe('Done again: to 5');
  });

  it('makes one step of a gesture, and a new one after it ended', () => {
    let history = record(startHistory(state(0)), edit(1), 'drag');
    history = record(history, edit(2), 'drag');
    history = record(endGesture(history), edit(3), 'drag');
    expect(at(undo(history).history)).toBe(2);
    expect(at(undo(undo(history).history).history)).toBe(0);
  });

  it('forgets what was undone once something else is done, and records nothing where nothing changed', () => {
    const history = record(undo(record(startHistory(state(0)), edit(1))).history, edit(2));
    expect(canRedo(history)).toBe(false);
    expect(record(history, history.present)).toBe(history);
  });

  it('can put what the server owns into every state', () => {
    const history = record(startHistory(state(0)), edit(1));
    const mapped = mapHistory(history, (document) => ({ ...document, garments: [] }));
    expect(undo(mapped).history.present.document.garments).toEqual([]);
    expect(at(undo(mapped).history)).toBe(0);
  });
});
