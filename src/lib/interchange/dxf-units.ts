import type { ImportFinding, Reading } from './reading';
import { toNumber } from './dxf-file';

/** $INSUNITS: its number, name and millimetres. */
const INSERT_UNITS: Readonly<Record<number, readonly [string, number]>> = {
  1: ['inches', 25.4],
  2: ['feet', 304.8],
  4: ['millimetres', 1],
  5: ['centimetres', 10],
  6: ['metres', 1000],
  8: ['microinches', 25.4e-6],
  9: ['mils', 0.0254],
  10: ['yards', 914.4],
  13: ['microns', 0.001],
  14: ['decimetres', 100],
  21: ['US survey feet', 1_200_000 / 3937]
};

/**
 * What one unit of the drawing is. The text 'UNITS: ENGLISH' (inches) or 'UNITS: METRIC' (millimetres) of pattern files
 * comes first, then $INSUNITS. $MEASUREMENT tells inches from metric only as a hint, so the units stay unknown.
 */
export function drawingUnits(
  header: ReadonlyMap<string, readonly [number, string][]>,
  word: string | null
): { units: Reading['units']; findings: ImportFinding[] } {
  const findings: ImportFinding[] = [];
  const find = (kind: string, message: string): void => {
    findings.push({ kind, severity: 'warns', place: null, about: null, measure: null, message });
  };
  const value = (name: string): number =>
    toNumber(header.get(name)?.find(([code]) => code === 70)?.[1] ?? '');
  const inserted = INSERT_UNITS[value('$INSUNITS')];
  const text =
    word === null ? null : /^\s*english\b/i.test(word) ? 25.4 : /^\s*metric\b/i.test(word) ? 1 : null;
  if (word !== null && text === null)
    find(
      'unknown-units',
      `The text 'UNITS: ${word.slice(0, 40)}' is neither ENGLISH nor METRIC; it was not used.`
    );
  if (text !== null) {
    if (inserted && inserted[1] !== text)
      find(
        'units-disagree',
        `The text of the file says ${text === 1 ? 'METRIC (millimetres)' : 'ENGLISH (inches)'}, its header says ${inserted[0]}. The text was believed: check the scale.`
      );
    return {
      units: {
        known: true,
        unit: text === 1 ? 'millimetres' : 'inches',
        scale: text,
        source: `the text UNITS: ${text === 1 ? 'METRIC' : 'ENGLISH'}`
      },
      findings
    };
  }
  if (inserted)
    return {
      units: { known: true, unit: inserted[0], scale: inserted[1], source: '$INSUNITS of the header' },
      findings
    };
  const inches = value('$MEASUREMENT') === 0 && header.has('$MEASUREMENT');
  find(
    'unknown-units',
    header.has('$MEASUREMENT')
      ? `The file does not name its unit. Its header leans to ${inches ? 'inches' : 'metric units'}, so 1 unit was taken as 1 ${inches ? 'inch' : 'mm'}: check the scale with a line that you know.`
      : 'The file does not name its unit. 1 unit was taken as 1 mm: check the scale with a line that you know.'
  );
  return {
    units: {
      known: false,
      unit: inches ? 'inches' : 'millimetres',
      scale: inches ? 25.4 : 1,
      source: header.has('$MEASUREMENT') ? 'a guess from $MEASUREMENT' : 'a guess: the file says nothing'
    },
    findings
  };
}
