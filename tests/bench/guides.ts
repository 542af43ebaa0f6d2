/*
 * How long guides take, how large they are and how much memory they need. Prints a table; asserts nothing about time.
 * Run: npx tsx tests/bench/guides.ts
 */
import { makeGuide } from '../../src/lib/guide/guide';
import { guideChoiceSchema } from '../../src/lib/guide/guide-choice';
import { guideFonts, sampleDocument, sampleInput } from '../unit/guide/sample-lay';

const fonts = guideFonts();
const cases: [string, number, object][] = [
  ['A4, 1 garment, 9 pieces', 1, { kind: 'sheets', paper: 'A4' }],
  ['A4, 2 garments, about 115 sheets', 2, { kind: 'sheets', paper: 'A4' }],
  ['A4, 20 garments, 180 pieces', 20, { kind: 'sheets', paper: 'A4' }],
  ['A0, 34 garments, 306 pieces', 34, { kind: 'sheets', paper: 'A0' }],
  ['whole, 34 garments over 58 m', 34, { kind: 'whole' }],
  ['panels on A3, 34 garments', 34, { kind: 'panels', paper: 'A3' }]
];

// Warm up: the first run reads the fonts and compiles.
await makeGuide(sampleInput(), guideChoiceSchema.parse({ kind: 'whole' }), fonts);

const rows = [];
for (const [name, garments, given] of cases) {
  const input = sampleInput(sampleDocument(garments));
  const choice = guideChoiceSchema.parse(given);
  const times: number[] = [];
  let peak = 0;
  let last = { sheets: 0, pages: 0, size: 0 };
  for (let run = 0; run < 3; run++) {
    const start = performance.now();
    const { bytes, pages, sheets } = await makeGuide(input, choice, fonts, () => {
      peak = Math.max(peak, process.memoryUsage().rss);
    });
    times.push(performance.now() - start);
    last = { sheets, pages, size: bytes.length };
  }
  rows.push({
    guide: name,
    sheets: last.sheets,
    pages: last.pages,
    'best ms': Math.round(Math.min(...times)),
    'ms a sheet': Math.round((10 * Math.min(...times)) / last.sheets) / 10,
    'file kB': Math.round(last.size / 1024),
    'peak MB': Math.round(peak / 1_048_576)
  });
}
console.table(rows);
