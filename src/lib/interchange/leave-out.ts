import { nest } from './nesting';
import type { Reading } from './reading';

/** A reading without one of its outlines; those directly inside it are offered in its place. */
export function withoutOutline(reading: Reading, outline: string): Reading {
  const crossed = new Set(
    reading.findings.filter(({ kind }) => kind === 'crosses-itself').map(({ about }) => about)
  );
  const freed = new Set(reading.outlines.filter(({ inside }) => inside === outline).map(({ id }) => id));
  const outlines = nest(reading.outlines.filter(({ id }) => id !== outline)).map((other) => ({
    ...other,
    offered: other.offered || (freed.has(other.id) && other.inside === null && !crossed.has(other.id))
  }));
  const elsewhere = <T extends { outline: string | null }>(thing: T, at: { x: number; y: number }): T => {
    if (thing.outline !== outline) return thing;
    const around = outlines
      .filter(
        ({ box, offered }) =>
          offered && at.x >= box.minX && at.x <= box.maxX && at.y >= box.minY && at.y <= box.maxY
      )
      .sort((a, b) => a.area - b.area)[0];
    return { ...thing, outline: around?.id ?? null };
  };
  return {
    ...reading,
    outlines,
    openLines: reading.openLines.map((line) => elsewhere(line, line.path.from)),
    mirrorLines: reading.mirrorLines.map((line) => elsewhere(line, line.path.from)),
    grains: reading.grains.map((grain) => elsewhere(grain, grain.from)),
    notches: reading.notches.map((notch) => elsewhere(notch, notch.at)),
    drillHoles: reading.drillHoles.map((hole) => elsewhere(hole, hole.at)),
    texts: reading.texts.map((text) => elsewhere(text, text.at)),
    findings: reading.findings.filter(({ about }) => about !== outline)
  };
}
