/**
 * The floors of the house, highest first: a file imports only from its own floor or from floors below it.
 * `units` to `guide` are pure: no Svelte, Knex, Konva or Node.
 */
const floors = [
  'routes',
  'lib/components',
  'lib/client',
  'lib/server',
  'lib/guide',
  'lib/settle',
  'lib/lay',
  'lib/drafting',
  'lib/interchange',
  'lib/pattern',
  'lib/cloth',
  'lib/geometry',
  'lib/units'
];

const firstPure = floors.indexOf('lib/guide');

const impure = [
  'svelte',
  'svelte/*',
  '$app/*',
  '$env/*',
  '@sveltejs/*',
  'knex',
  'konva',
  'node:*',
  'better-sqlite3'
];

/** What a floor may not import, as patterns for `no-restricted-imports`. */
function forbidden(index) {
  const above = floors.slice(0, index).map((floor) => floor.replace('lib/', ''));
  const groups = above
    .filter((name) => name !== 'routes')
    .map((name) => ({
      group: [`$lib/${name}`, `$lib/${name}/*`, `$lib/${name}/**`, `**/${name}/**`],
      message: `${floors[index]} lies below ${name}.`
    }));
  // The client and component floors never reach into the server; SvelteKit refuses that as well.
  if (floors[index] === 'lib/components' || floors[index] === 'lib/client') {
    groups.push({ group: ['$lib/server/*', '$lib/server/**'], message: 'Server-only code.' });
  }
  if (index >= firstPure) {
    groups.push({
      group: impure,
      message: `${floors[index]} is pure: no framework, database, canvas or Node.`
    });
  }
  return groups;
}

/** Worker entries stand beside the code that they run; they alone may talk to Node. */
export const floorRules = floors.slice(1).map((floor, i) => ({
  files: [`src/${floor}/**/*.{ts,js,svelte}`],
  ignores: ['**/*.worker.ts'],
  rules: { 'no-restricted-imports': ['error', { patterns: forbidden(i + 1) }] }
}));
