import type { ClothRole } from '$lib/pattern/panel';

/** How each cloth role is written. */
export const clothRoleWords: Readonly<Record<ClothRole, string>> = {
  main: 'Main cloth',
  lining: 'Lining',
  interlining: 'Interlining',
  contrast: 'Contrast',
  toile: 'Toile'
};
