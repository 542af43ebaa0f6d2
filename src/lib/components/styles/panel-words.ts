import type { Corner, TurnSet } from '$lib/pattern/panel';

export const treatmentWords: Readonly<Record<Corner['treatment'], string>> = {
  square: 'square',
  mitred: 'mitred',
  mirrored: 'mirrored',
  blunt: 'blunt'
};

export const treatmentOptions = Object.entries(treatmentWords).map(([value, word]) => ({ value, word }));

export const turnWords: Readonly<Record<TurnSet, string>> = {
  bothWays: 'Along the grain, both ways',
  oneWay: 'Along the grain, one way',
  across: 'Across the grain',
  bias: 'On the bias',
  free: 'Freely'
};

export const turnOptions = Object.entries(turnWords).map(([value, word]) => ({ value, word }));
