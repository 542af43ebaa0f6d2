/** The pages of the help, in the order in which they are read. */
export const helpPages = [
  { href: '/help', word: 'From order to cut' },
  { href: '/help/words', word: 'Words' },
  { href: '/help/readings', word: 'Readings and findings' },
  { href: '/help/keys', word: 'Keys of the Lay table' },
  { href: '/help/cautions', word: 'Cautions' }
] as const;
