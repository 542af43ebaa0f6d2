/** @type {import('prettier').Config} */
export default {
  printWidth: 110,
  singleQuote: true,
  trailingComma: 'none',
  plugins: ['prettier-plugin-svelte', 'prettier-plugin-tailwindcss'],
  tailwindConfig: './tailwind.config.ts',
  overrides: [{ files: '*.svelte', options: { parser: 'svelte' } }]
};
