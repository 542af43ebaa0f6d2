/*
 * Who may do what: the permission table of the product, and the only place that decides it. Pages, form actions,
 * API routes and queries ask here.
 */

export const roles = ['owner', 'patternMaker', 'cutter'] as const;
export type Role = (typeof roles)[number];

/** What a person may be allowed to do, named as 'noun: verb'. */
const table = {
  /** To be there at all: what every member has, whatever the role. */
  'studio: enter': ['owner', 'patternMaker', 'cutter'],
  'people: manage': ['owner'],
  'studio: manage': ['owner'],
  'prices: see': ['owner', 'patternMaker'],
  'prices: change': ['owner', 'patternMaker'],
  'payments: manage': ['owner'],
  'clients: see contact': ['owner', 'patternMaker'],
  'measurements: see': ['owner', 'patternMaker'],
  'orders: see': ['owner', 'patternMaker', 'cutter'],
  'orders: change': ['owner', 'patternMaker'],
  'cloths: see': ['owner', 'patternMaker', 'cutter'],
  'cloths: change': ['owner', 'patternMaker'],
  /** Measuring rolls, remnants and flaws in, reserving them: whoever stands at the shelf. Prices are apart. */
  'cloth lengths: change': ['owner', 'patternMaker', 'cutter'],
  'styles: see': ['owner', 'patternMaker', 'cutter'],
  'styles: change': ['owner', 'patternMaker'],
  'lays: see': ['owner', 'patternMaker', 'cutter'],
  'lays: change': ['owner', 'patternMaker', 'cutter'],
  'lays: release': ['owner', 'patternMaker', 'cutter'],
  /** Ticking off and recording the cut. */
  'lays: cut': ['owner', 'patternMaker', 'cutter'],
  'guides: print': ['owner', 'patternMaker', 'cutter'],
  'audit: see': ['owner'],
  'demo: clear': ['owner']
} as const satisfies Record<string, readonly Role[]>;

export type Permission = keyof typeof table;
export const permissions = Object.keys(table) as Permission[];

/** Whether a role holds a permission. Unknown roles hold none. */
export function may(role: Role, permission: Permission): boolean {
  return (table[permission] as readonly Role[]).includes(role);
}
