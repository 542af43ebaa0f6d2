import type { SettleProblem } from '../../src/lib/settle/problem';

/** An instance in the schema of the open strip packing data. */
export interface StripFile {
  readonly name: string;
  readonly stripWidth: number;
  readonly pieces: readonly {
    readonly id: string;
    readonly quantity: number;
    readonly rotations: readonly number[];
    readonly outline: readonly (readonly [number, number])[];
  }[];
}

/** The instance as a problem: an open strip, no clearance, every rotation that it allows. */
export function stripProblem(strip: StripFile): SettleProblem {
  return {
    width: strip.stripWidth,
    length: null,
    outline: null,
    keepOuts: [],
    clearance: 0,
    // The unit of the data is not known; a millionth of the width is far below anything that can be cut.
    touching: strip.stripWidth * 1e-6,
    pieces: strip.pieces.map((piece) => ({
      id: piece.id,
      name: `Piece ${piece.id}`,
      outline: piece.outline.map(([x, y]) => ({ x, y })),
      copies: piece.quantity,
      ways: piece.rotations.map((turn) => ({ turn, flip: false, nap: 0 as const })),
      tilt: 0,
      napGroup: null,
      onFold: false,
      band: null,
      lattice: null
    })),
    locked: [],
    preferredSide: null,
    start: []
  };
}
