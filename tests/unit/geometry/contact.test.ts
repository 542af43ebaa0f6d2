import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { travel, travelOnGrid } from '$lib/geometry/contact';
import { clearBy, outlineDistance } from '$lib/geometry/distance';
import { overlapDepth } from '$lib/geometry/overlap';
import { movePrepared, placePrepared, prepare } from '$lib/geometry/prepared';
import { box, points, randomFrom, star, starOutline } from './outlines';
import { runs } from '../../runs';

const right = { x: 1, y: 0 };
const left = { x: -1, y: 0 };
const up = { x: 0, y: 1 };
const down = { x: 0, y: -1 };
const square = prepare(box(0, 0, 100, 100));
const moved = (x: number, y: number) => movePrepared(square, x, y);

describe('pushing a piece', () => {
  it('stops exactly at the clearance along an axis', () => {
    expect(travel(square, [moved(250.123, 0)], right, 0)).toBe(150.123);
    expect(travel(square, [moved(250.123, 0)], right, 3)).toBe(147.123);
    expect(travel(square, [moved(-250.123, 60)], left, 5)).toBe(145.123);
    expect(travel(square, [moved(0, 300), moved(0, 200)], up, 3)).toBe(97);
    expect(travel(square, [moved(0, -200)], down, 0, 42.5)).toBe(42.5);
  });

  it('passes what is beside, meets what is beside by less than the clearance, round the corner', () => {
    expect(travel(square, [moved(250, 100)], right, 0)).toBe(Infinity);
    expect(travel(square, [moved(250, 103)], right, 3, 900)).toBe(900);
    // The corner comes within 5 of the corner: 4 across, so 3 along.
    expect(travel(square, [moved(250, 104)], right, 5)).toBe(147);
    expect(travel(square, [moved(-300, 0)], right, 3)).toBe(Infinity);
  });

  it('slides along and away from what it touches, and not into it', () => {
    for (const clearance of [0, 3]) {
      const beside = moved(100 + clearance, 20);
      expect(travel(square, [beside], right, clearance)).toBe(0);
      expect(travel(square, [beside], up, clearance, 500)).toBe(500);
      expect(travel(square, [beside], left, clearance, 500)).toBe(500);
    }
    // Along a slope, where the slide is only true to the last digits.
    const turned = (x: number, y: number) => placePrepared(square, { x, y, turn: 30, flip: false });
    const [cos, sin] = [Math.cos(Math.PI / 6), Math.sin(Math.PI / 6)];
    const still = turned(0, 0);
    const touching = turned(cos * 100, sin * 100);
    expect(travel(touching, [still], { x: -sin, y: cos }, 0, 500)).toBe(500);
    expect(travel(touching, [still], { x: -cos, y: -sin }, 0, 500)).toBe(0);
  });

  it('lets a piece that starts too near leave and slide, and come no nearer', () => {
    const near = moved(101, 0);
    expect(travel(square, [near], right, 3)).toBe(0);
    expect(travel(square, [near], up, 3, 500)).toBe(500);
    expect(travel(square, [near], left, 3, 500)).toBe(500);
    // Touching by five thousandths is touching still.
    expect(travel(square, [moved(99.996, 20)], up, 0, 500)).toBe(500);
    expect(travel(square, [moved(99.996, 20)], right, 0, 500)).toBe(0);
  });

  it('does not move what overlaps', () => {
    for (const direction of [left, right, up, down]) {
      expect(travel(square, [moved(50, 0)], direction, 3)).toBe(0);
      expect(travel(square, [square], direction, 0)).toBe(0);
      expect(travel(prepare(box(10, 10, 20, 20)), [square], direction, 0)).toBe(0);
    }
  });

  it('enters a gap that fits to the thousandth and refuses one that does not', () => {
    const gate = [moved(300, 100.003), moved(300, -100.003)];
    expect(travel(square, gate, right, 0.003, 400)).toBe(400);
    expect(travel(square, gate, right, 0.004, 400)).toBe(199.997);
    expect(travel(square, [moved(300, 100), moved(300, -100)], right, 0, 400)).toBe(400);
  });

  it('follows a needle into a notch only as far as it is wide', () => {
    const needle = prepare(points([0, -1], [50, 0], [0, 1]));
    const notch = prepare(points([60, -50], [160, -50], [160, 50], [60, 50], [60, 2], [140, 0], [60, -2]));
    const way = travel(needle, [notch], right, 0);
    expect(overlapDepth(movePrepared(needle, way, 0), notch).depth).toBeLessThanOrEqual(0.01);
    // The notch is flatter by half than the needle: they touch at the notch's mouth.
    expect(way).toBeCloseTo(90, 2);
  });

  it('refuses a direction that has no length', () => {
    expect(() => travel(square, [], { x: 0, y: 0 }, 0)).toThrow(RangeError);
    expect(travel(square, [], right, 3)).toBe(Infinity);
  });

  it('leaves the piece clear for the check, and too near two hundredths later', () => {
    let contacts = 0;
    fc.assert(
      fc.property(
        starOutline(),
        starOutline(),
        starOutline(),
        fc.integer({ min: 0, max: 359 }),
        fc.constantFrom(0, 0, 3, 5),
        fc.integer({ min: -90, max: 90 }),
        (one, two, three, angle, clearance, across) => {
          // Multiples of 90° are frequent, because the table has four directions.
          const turn = angle % 3 === 0 ? angle : Math.round(angle / 90) * 90;
          const radians = (turn * Math.PI) / 180;
          const u =
            turn % 90 === 0
              ? { x: [1, 0, -1, 0][(turn / 90) % 4]!, y: [0, 1, 0, -1][(turn / 90) % 4]! }
              : { x: Math.cos(radians), y: Math.sin(radians) };
          const moving = prepare(one);
          const put = (outline: typeof one, along: number, beside: number) =>
            movePrepared(prepare(outline), u.x * along - u.y * beside, u.y * along + u.x * beside);
          const fixed = [put(two, 320, across), put(three, 480, -across)];
          const way = travel(moving, fixed, u, clearance, 1000);
          const at = (t: number) => movePrepared(moving, u.x * t, u.y * t);
          for (const other of fixed) {
            expect(clearBy(at(way), other, clearance)).toBe(true);
            expect(overlapDepth(at(way), other).depth).toBeLessThan(1e-4);
            if (clearance > 0)
              expect(outlineDistance(at(way), other).distance).toBeGreaterThanOrEqual(clearance - 1e-6);
          }
          // Every step of the way was clear as well.
          for (let k = 0; k < 20; k++)
            for (const other of fixed) expect(clearBy(at((way * k) / 20), other, clearance)).toBe(true);
          if (way === 1000) return;
          contacts++;
          // Without a clearance a slanting contact sinks in slowly, so it is only begun two hundredths later; a corner that
          // is met exactly in passing is touched and no more.
          const met = fixed.some((other) =>
            clearance > 0
              ? !clearBy(at(way + 0.02), other, clearance)
              : overlapDepth(at(way + 0.02), other).depth > 0 ||
                outlineDistance(at(way), other).distance < 0.0011
          );
          expect(met).toBe(true);
        }
      ),
      { seed: 51, numRuns: runs(300) }
    );
    expect(contacts).toBeGreaterThan(200);
  });

  it('is convicted two hundredths after a head-on contact', () => {
    const random = randomFrom(52);
    for (let k = 0; k < 200; k++) {
      const turn = Math.floor(random() * 3_600_000) / 10_000;
      const radians = (turn * Math.PI) / 180;
      const u = { x: Math.cos(radians), y: Math.sin(radians) };
      const moving = placePrepared(square, { x: 0, y: 0, turn, flip: false });
      const fixed = placePrepared(square, { x: u.x * 300, y: u.y * 300, turn, flip: false });
      const way = travel(moving, [fixed], u, 0);
      expect(way).toBeCloseTo(200, 2);
      const at = (t: number) => movePrepared(moving, u.x * t, u.y * t);
      expect(overlapDepth(at(way), fixed).depth).toBeLessThan(1e-4);
      expect(overlapDepth(at(way + 0.02), fixed).depth).toBeGreaterThan(0.01);
    }
  });

  it('moves on the grid along any direction and stays clear', () => {
    fc.assert(
      fc.property(starOutline(), starOutline(), fc.integer({ min: 1, max: 359 }), (one, two, angle) => {
        const u = { x: Math.cos(angle), y: Math.sin(angle) };
        const moving = prepare(one);
        const other = movePrepared(prepare(two), u.x * 300, u.y * 300);
        for (const clearance of [0, 3]) {
          const move = travelOnGrid(moving, [other], u, clearance, 900);
          expect(Math.round(move.x * 1000) / 1000).toBe(move.x);
          expect(clearBy(movePrepared(moving, move.x, move.y), other, clearance)).toBe(true);
          expect(Math.hypot(move.x, move.y)).toBeGreaterThan(50);
        }
      }),
      { seed: 53, numRuns: runs(100) }
    );
  });

  it('repeats: snugging again goes nowhere', () => {
    fc.assert(
      fc.property(starOutline(), fc.integer(), (one, seed) => {
        const random = randomFrom(seed);
        const fixed = Array.from({ length: 5 }, (_, i) =>
          movePrepared(prepare(star(30, 60, random)), 250 + i * 30, (i - 2) * 130)
        );
        const moving = prepare(one);
        for (const clearance of [0, 3]) {
          const way = travel(moving, fixed, right, clearance, 2000);
          const again = travel(movePrepared(moving, way, 0), fixed, right, clearance, 2000 - way);
          if (way < 2000) expect(again).toBeLessThanOrEqual(0.001);
        }
      }),
      { seed: 54, numRuns: runs(100) }
    );
  });
});
