/**
 * Which pairs overlap, how badly, and how much that weighs: row i, column j; pairs of items stand in both rows. Columns
 * from n on are what is fixed.
 *
 * The weight of a pair grows while it goes on overlapping and sinks back afterwards (guided local search; factors of
 * Gardeyn, Vanden Berghe and Wauters 2025).
 */
export type Pairs = ReturnType<typeof createPairs>;

export function createPairs(n: number, size: Float64Array) {
  const all = size.length;
  const loss = new Float32Array(n * all);
  const weight = new Float32Array(n * all).fill(1);
  /** How many others each item overlaps. */
  const overlaps = new Int32Array(n);
  /** Pairs whose weight is above 1. */
  let heavy = new Int32Array(1024);
  let heavyCount = 0;
  /** How many pairs overlap. */
  const counts = new Int32Array(1);

  /** Notes that items i and j, or item i and the fixed j, overlap. */
  function note(i: number, j: number, value: number): void {
    loss[i * all + j] = value;
    overlaps[i]!++;
    counts[0]!++;
    if (j >= n) return;
    loss[j * all + i] = value;
    overlaps[j]!++;
  }

  /** Forgets every overlap of item i. */
  function clearRow(i: number): void {
    if (overlaps[i] === 0) return;
    const base = i * all;
    for (let j = 0; j < all; j++) {
      if (loss[base + j] === 0) continue;
      loss[base + j] = 0;
      counts[0]!--;
      if (j < n) {
        loss[j * all + i] = 0;
        overlaps[j]!--;
      }
    }
    overlaps[i] = 0;
  }

  /** Forgets every overlap. */
  function clear(): void {
    for (let i = 0; i < n; i++) if (overlaps[i]! > 0) loss.fill(0, i * all, (i + 1) * all);
    overlaps.fill(0);
    counts[0] = 0;
  }

  function totalLoss(): number {
    let total = 0;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < i; j++) total += loss[base + j]!;
      for (let j = n; j < all; j++) total += loss[base + j]!;
    }
    return total;
  }

  /** The overlapping pair with the greatest loss: item, other, loss; −1 if there is none. */
  function worstPair(): { i: number; j: number; loss: number } {
    const worst = { i: -1, j: -1, loss: 0 };
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      for (let j = 0; j < all; j++) {
        if (loss[i * all + j]! <= worst.loss) continue;
        worst.loss = loss[i * all + j]!;
        worst.i = i;
        worst.j = j;
      }
    }
    return worst;
  }

  /** The greatest loss of item i against another, taken apart from the sizes of both: a depth in yardsticks. */
  function deepest(i: number): number {
    let most = 0;
    for (let j = 0; j < all; j++) {
      const value = loss[i * all + j]!;
      if (value > 0) most = Math.max(most, value / (size[i]! * size[j]!));
    }
    return most;
  }

  function resetWeights(): void {
    for (let k = 0; k < heavyCount; k++) {
      const pair = heavy[k]!;
      weight[pair] = 1;
      const i = Math.floor(pair / all);
      const j = pair % all;
      if (j < n) weight[j * all + i] = 1;
    }
    heavyCount = 0;
  }

  /** Raises the weight of every pair that overlaps, most for the deepest, and lets the others sink back to 1. */
  function reweigh(): void {
    let most = 0;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < all; j++) if (loss[base + j]! > most) most = loss[base + j]!;
    }
    if (most === 0) return;
    let left = 0;
    for (let k = 0; k < heavyCount; k++) {
      const pair = heavy[k]!;
      if (loss[pair]! > 0) {
        heavy[left++] = pair;
        continue;
      }
      const value = Math.max(1, weight[pair]! * 0.95);
      setWeight(pair, value);
      if (value > 1) heavy[left++] = pair;
    }
    heavyCount = left;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < all; j++) {
        const value = loss[base + j]!;
        if (value === 0 || (j < i && j < n)) continue;
        const pair = base + j;
        if (weight[pair] === 1) {
          if (heavyCount === heavy.length) {
            const wide = new Int32Array(heavy.length * 2);
            wide.set(heavy);
            heavy = wide;
          }
          heavy[heavyCount++] = pair;
        }
        setWeight(pair, Math.min(1e12, weight[pair]! * (1.2 + (0.8 * value) / most)));
      }
    }
  }

  function setWeight(pair: number, value: number): void {
    weight[pair] = value;
    const i = Math.floor(pair / all);
    const j = pair % all;
    if (j < n) weight[j * all + i] = value;
  }

  return {
    weight,
    overlaps,
    note,
    clear,
    clearRow,
    totalLoss,
    worstPair,
    deepest,
    resetWeights,
    reweigh,
    count: () => counts[0]!,
    lossOf: (i: number, j: number) => loss[i * all + j]!
  };
}
