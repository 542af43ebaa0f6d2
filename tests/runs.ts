const times = Number(process.env.WARPWISE_DEEP ?? 1);

/** How many cases a property test tries: `quick` in the everyday suite, WARPWISE_DEEP times as many in `npm run test:deep`. */
export function runs(quick: number): number {
  return Math.round(quick * times);
}
