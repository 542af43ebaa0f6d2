import { inflated, opposite, ringKey, type Form } from './form';
import { noFitRings, type Ring } from './no-fit';
import { createTables, type NoFitTables } from './no-fit-table';

/** The no-fit regions of pairs of forms, built when first asked for and dropped when they take too much room. */
export interface NoFitStore {
  readonly tables: NoFitTables;
  /**
   * Where form g may not lie, seen from form f: table number × 2, + 1 if the relative position must be negated
   * before it is looked up.
   */
  find(f: number, g: number): number;
  /** The same if the table stands already, else −1. */
  known(f: number, g: number): number;
  /** Drops every table once they outgrow the cap. Numbers given before are void then. */
  trim(): void;
  built(): number;
}

/** Above so many forms a hashed map takes the place of a square of numbers. */
const SQUARE = 1500;

/**
 * @param clear per form: whether the clearance is kept from it
 * @param clearance in quanta
 * @param cap bytes of tables to keep at most
 */
export function createStore(
  forms: readonly Form[],
  clear: readonly boolean[],
  clearance: number,
  cap: number
): NoFitStore {
  const count = forms.length;
  const byKey = new Map<string, number>();
  forms.forEach((form, f) => {
    const key = ringKey(form.ring) + clear[f];
    if (!byKey.has(key)) byKey.set(key, f);
  });
  const turned = forms.map((form, f) => byKey.get(ringKey(opposite(form.ring)) + clear[f]) ?? -1);
  const wide: (Ring | undefined)[] = [];
  const tables = createTables();
  const square = count <= SQUARE ? new Int32Array(count * count).fill(-1) : null;
  const map = new Map<number, number>();
  let built = 0;

  function find(f: number, g: number): number {
    const known = square ? square[f * count + g]! : (map.get(f * count + g) ?? -1);
    return known >= 0 ? known : build(f, g);
  }

  function build(f: number, g: number): number {
    // NF(g, f) = −NF(f, g), and so is NF(−f, −g): the four share one table.
    const nf = turned[f]!;
    const ng = turned[g]!;
    let bestF = f;
    let bestG = g;
    let sign = 0;
    const offer = (a: number, b: number, s: number) => {
      if (a < 0 || b < 0 || a * count + b >= bestF * count + bestG) return;
      bestF = a;
      bestG = b;
      sign = s;
    };
    offer(g, f, 1);
    offer(nf, ng, 1);
    offer(ng, nf, 0);
    let word = square ? square[bestF * count + bestG]! : (map.get(bestF * count + bestG) ?? -1);
    if (word < 0) {
      const a =
        clearance > 0 && clear[bestF] && clear[bestG]
          ? (wide[bestF] ??= inflated(forms[bestF]!.ring, clearance))
          : forms[bestF]!.ring;
      word = tables.add(noFitRings(a, forms[bestG]!.ring)) * 2;
      built++;
      keep(bestF, bestG, word);
    }
    word ^= sign;
    keep(f, g, word);
    return word;
  }

  function keep(f: number, g: number, word: number): void {
    if (square) square[f * count + g] = word;
    else map.set(f * count + g, word);
  }

  return {
    tables,
    find,
    known: (f, g) => (square ? square[f * count + g]! : (map.get(f * count + g) ?? -1)),
    trim() {
      if (tables.bytes() + map.size * 48 < cap) return;
      tables.clear();
      square?.fill(-1);
      map.clear();
    },
    built: () => built
  };
}
