import Flatbush from 'flatbush';
import { placeOutline } from '$lib/geometry/placement';
import { millimetres } from '$lib/lay/wording';
import { depthOf, placedOf } from './placed-outline';
import type { ProblemFault, SettlePiece, SettleProblem } from './problem';

/** What makes a problem hopeless as it stands, before anything runs: pieces that fit in no way, locks that contradict. */
export function problemFaults(problem: SettleProblem): ProblemFault[] {
  return [
    ...problem.pieces.flatMap((piece) => (piece.copies > 0 ? pieceFaults(piece, problem) : [])),
    ...lockFaults(problem)
  ];
}

function pieceFaults(piece: SettlePiece, problem: SettleProblem): ProblemFault[] {
  const { width, length, touching } = problem;
  if (piece.ways.length === 0)
    return [fault('no-way', [piece.id], null, `${piece.name} has no way to lie on this cloth.`)];
  const tilts = piece.tilt > 0 ? [0, piece.tilt, -piece.tilt] : [0];
  const sizes = piece.ways.flatMap((way) =>
    tilts.map((tilt) => {
      const { minX, minY, maxX, maxY } = placedOf(
        '',
        placeOutline(piece.outline, { x: 0, y: 0, turn: way.turn + tilt, flip: way.flip }),
        false
      );
      return { along: maxX - minX, across: maxY - minY };
    })
  );
  const across = Math.min(...sizes.map((size) => size.across));
  const wide = piece.band ? piece.band.to - piece.band.from : width;
  if (across > wide + touching)
    return [
      fault(
        'too-wide',
        [piece.id],
        across - wide,
        `${piece.name} is ${millimetres(across)} across in every way it may lie; the ${piece.band ? 'part of the cloth that it needs' : 'cloth'} is ${millimetres(wide)} wide.`
      )
    ];
  if (length === null) return [];
  const along = Math.min(...sizes.filter((size) => size.across <= wide + touching).map((size) => size.along));
  return along > length + touching
    ? [
        fault(
          'too-long',
          [piece.id],
          along - length,
          `${piece.name} is ${millimetres(along)} long in every way it may lie; the cloth is ${millimetres(length)} long.`
        )
      ]
    : [];
}

function lockFaults(problem: SettleProblem): ProblemFault[] {
  const { width, length, touching } = problem;
  const locks = problem.locked.map((lock) => ({ ...lock, placed: placedOf(lock.id, lock.outline, true) }));
  if (locks.length === 0) return [];
  const flaws = problem.keepOuts.map((outline) => placedOf('', outline, true));
  const faults: ProblemFault[] = [];
  const boxes = new Flatbush(locks.length);
  for (const { placed } of locks) boxes.add(placed.minX, placed.minY, placed.maxX, placed.maxY);
  boxes.finish();
  locks.forEach((lock, i) => {
    const { minX, minY, maxX, maxY } = lock.placed;
    const out = Math.max(-minX, -minY, maxY - width, maxX - (length ?? Infinity));
    if (out > touching)
      faults.push(
        fault('lock-outside', [lock.id], out, `${lock.name} is locked ${millimetres(out)} outside the cloth.`)
      );
    const onFlaw = Math.max(0, ...flaws.map((flaw) => depthOf(lock.placed, flaw)));
    if (onFlaw > touching)
      faults.push(fault('lock-on-flaw', [lock.id], onFlaw, `${lock.name} is locked on a flaw of the cloth.`));
    const near = boxes.search(minX, minY, maxX, maxY).filter((j) => j < i);
    for (const j of near.sort((a, b) => a - b)) {
      const other = locks[j]!;
      const depth = depthOf(lock.placed, other.placed);
      if (depth > touching)
        faults.push(
          fault(
            'locks-collide',
            [other.id, lock.id],
            depth,
            `${other.name} and ${lock.name} are locked ${millimetres(depth)} into each other.`
          )
        );
    }
  });
  return faults;
}

function fault(
  kind: ProblemFault['kind'],
  pieces: readonly string[],
  measure: number | null,
  message: string
): ProblemFault {
  return { kind, pieces, measure, message };
}
