import { existsSync, mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { Worker } from 'node:worker_threads';
import { settleWithWorkers } from '../../src/lib/server/settle-workers';
import { validate } from '../../src/lib/settle/validate';
import { buildWorkers } from '../../worker-build.js';
import { stripProblem, type StripFile } from './strip-file';

/*
 * Settles open strip packing instances and says how dense the lays are.
 *
 *   npm run bench:settle -- --file ../shared/data/strip-packing/shirts.json --seconds 60 --workers 2 --seed 1 --json
 *   npm run bench:settle -- --all --seconds 10 --seeds 3
 */

const options = new Map<string, string>();
for (let i = 2; i < process.argv.length; i++) {
  const name = process.argv[i]!;
  const next = process.argv[i + 1];
  if (next !== undefined && !next.startsWith('--')) options.set(name, process.argv[++i]!);
  else options.set(name, 'yes');
}
const number = (name: string, otherwise: number): number => {
  const value = Number(options.get(name) ?? otherwise);
  if (!Number.isFinite(value) || value <= 0) throw new RangeError(`${name} takes a number above 0`);
  return value;
};
const seconds = number('--seconds', 10);
const workers = number('--workers', 2);
const firstSeed = number('--seed', 1);
const seeds = number('--seeds', 1);
const data = path.resolve(options.get('--data') ?? '../shared/data/strip-packing');

const folder = mkdtempSync(path.resolve('.svelte-kit/bench-settle-'));
process.on('exit', () => rmSync(folder, { recursive: true, force: true }));
await buildWorkers(folder);

interface Line {
  readonly name: string;
  readonly density: number;
  readonly length: number;
  readonly seconds: number;
  readonly evaluations: number;
  readonly valid: boolean;
  readonly seed: number;
  readonly workers: number;
  readonly firstSeconds: number;
  readonly firstDensity: number;
}

async function settle(file: string, seed: number): Promise<Line> {
  const strip = JSON.parse(readFileSync(file, 'utf8')) as StripFile;
  const problem = stripProblem(strip);
  let first: { density: number; seconds: number } | null = null;
  const {
    result,
    evaluations,
    seconds: spent
  } = await settleWithWorkers(problem, {
    spawn: (workerData) => new Worker(path.join(folder, 'settle.worker.js'), { workerData }),
    workers,
    seed,
    seconds,
    onBest: (best, at) => (first ??= { density: best.density, seconds: at })
  });
  const complete = result.leftOver.length === 0;
  return {
    name: strip.name,
    density: round(result.density * 100, 4),
    length: round(result.length, 6),
    seconds: round(spent, 2),
    evaluations,
    valid: complete && validate(problem, result).length === 0,
    seed,
    workers,
    firstSeconds: round(first!.seconds, 2),
    firstDensity: round(first!.density * 100, 2)
  };
}

const round = (value: number, digits: number) => Math.round(value * 10 ** digits) / 10 ** digits;

if (options.has('--all')) {
  const published = JSON.parse(readFileSync(path.join(data, 'published.json'), 'utf8')) as {
    instances: Record<
      string,
      { bestKnown: { density: number }; results: Record<string, { avg: number | null }> }
    >;
  };
  const files = readdirSync(data).filter((name) => {
    if (!name.endsWith('.json') || name === 'published.json') return false;
    return 'pieces' in (JSON.parse(readFileSync(path.join(data, name), 'utf8')) as object);
  });
  console.log(`${seconds} s, ${workers} workers, ${seeds} seeds from ${firstSeed}`);
  console.log('instance    mean     best     min      first        M eval/s  valid  published mean / best');
  for (const file of files) {
    const lines: Line[] = [];
    for (let k = 0; k < seeds; k++) lines.push(await settle(path.join(data, file), firstSeed + k));
    const densities = lines.map((line) => line.density);
    const known = published.instances[lines[0]!.name];
    console.log(
      [
        lines[0]!.name.padEnd(10),
        (densities.reduce((a, b) => a + b, 0) / densities.length).toFixed(2).padStart(7),
        Math.max(...densities)
          .toFixed(2)
          .padStart(8),
        Math.min(...densities)
          .toFixed(2)
          .padStart(8),
        `${lines[0]!.firstDensity.toFixed(1)} @${lines[0]!.firstSeconds}s`.padStart(14),
        (lines.reduce((a, l) => a + l.evaluations / l.seconds, 0) / lines.length / 1e6)
          .toFixed(2)
          .padStart(8),
        lines.every((line) => line.valid) ? '   yes' : '    NO',
        known ? `   ${known.results.gardeyn2025?.avg ?? '–'} / ${known.bestKnown.density}` : '   –'
      ].join(' ')
    );
  }
} else {
  const file = options.get('--file');
  if (!file || !existsSync(file)) throw new Error('--file names an instance, or --all takes every one');
  const line = await settle(file, firstSeed);
  if (options.has('--json')) console.log(JSON.stringify(line));
  else console.log(line);
}
process.exit(0);
