/**
 * A seeded source of numbers, 0 ≤ n < 1: xoshiro128** of Blackman and Vigna (2018, public domain), its state
 * filled by splitmix32. The same seed gives the same numbers everywhere.
 */
export function randomFrom(seed: number): () => number {
  const state = new Uint32Array(4);
  let filler = seed >>> 0;
  for (let i = 0; i < 4; i++) {
    filler = (filler + 0x9e3779b9) >>> 0;
    let z = filler;
    z = Math.imul(z ^ (z >>> 16), 0x21f0aaad);
    z = Math.imul(z ^ (z >>> 15), 0x735a2d97);
    state[i] = z ^ (z >>> 15);
  }
  return () => {
    const s1 = state[1]!;
    const times5 = Math.imul(s1, 5);
    const result = Math.imul((times5 << 7) | (times5 >>> 25), 9) >>> 0;
    state[2]! ^= state[0]!;
    state[3]! ^= s1;
    state[1]! ^= state[2]!;
    state[0]! ^= state[3]!;
    state[2]! ^= s1 << 9;
    const s3 = state[3]!;
    state[3] = (s3 << 11) | (s3 >>> 21);
    return result / 4294967296;
  };
}

/** `list` in a random order, in place. */
export function shuffle(list: Int32Array, count: number, random: () => number): void {
  for (let i = count - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    const keep = list[i]!;
    list[i] = list[j]!;
    list[j] = keep;
  }
}
