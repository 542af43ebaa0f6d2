import type { Choice } from '$lib/drafting/choices';
import { formatLength, parseLength, type LengthUnit } from '$lib/units/length';

/*
 * Choices of a draft as a form: `choice.<id>`, lengths as people type them.
 */

/** What the form shows before anybody typed: the defaults, or the values of an earlier run. */
export function choiceTexts(
  choices: readonly Choice[],
  unit: LengthUnit,
  values: Readonly<Record<string, unknown>> = {}
): Record<string, string> {
  return Object.fromEntries(
    choices.map((choice) => {
      const value = values[choice.id] ?? choice.default;
      const text =
        choice.kind === 'length'
          ? formatLength(value as number, unit)
          : choice.kind === 'yesNo'
            ? value
              ? 'yes'
              : ''
            : String(value);
      return [`choice.${choice.id}`, text];
    })
  );
}

/** The values of the choices in a posted form; faults by field. */
export function readChoiceTexts(
  choices: readonly Choice[],
  values: Readonly<Record<string, string>>,
  unit: LengthUnit
): { values: Record<string, number | string | boolean>; errors: Record<string, string> } {
  const read: Record<string, number | string | boolean> = {};
  const errors: Record<string, string> = {};
  for (const choice of choices) {
    const name = `choice.${choice.id}`;
    const text = (values[name] ?? '').trim();
    if (choice.kind === 'yesNo') read[choice.id] = text !== '';
    else if (choice.kind === 'oneOf') read[choice.id] = text === '' ? choice.default : text;
    else if (text === '') read[choice.id] = choice.default;
    else if (choice.kind === 'length') {
      const negative = /^[-−]/.test(text);
      const reading = parseLength(text.replace(/^[-−]\s*/, ''), unit);
      if (reading.error !== undefined) errors[name] = reading.error;
      else read[choice.id] = negative ? -reading.mm : reading.mm;
    } else {
      const number = Number(text.replace(',', '.'));
      if (Number.isFinite(number)) read[choice.id] = number;
      else errors[name] = 'This is no number.';
    }
    const value = read[choice.id];
    if (
      choice.kind === 'length' &&
      typeof value === 'number' &&
      (value < choice.min - 0.01 || value > choice.max + 0.01)
    )
      errors[name] = `From ${formatLength(choice.min, unit)} to ${formatLength(choice.max, unit)}.`;
    if (choice.kind === 'number' && typeof value === 'number' && (value < choice.min || value > choice.max))
      errors[name] = `From ${choice.min} to ${choice.max}.`;
    if (choice.kind === 'number' && choice.whole && typeof value === 'number' && !Number.isInteger(value))
      errors[name] = 'A whole number, please.';
    if (choice.kind === 'oneOf' && !choice.options.some((option) => option.value === read[choice.id]))
      errors[name] = 'Choose one of the list.';
  }
  return { values: read, errors };
}
