import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import type { Millimetres } from '$lib/units/measure';

/*
 * Choices of a draft: what the maker may decide besides the measurements. Each says what it changes, in which range.
 */

interface Named {
  readonly id: string;
  readonly label: string;
  /** What it changes, in one sentence. */
  readonly says: string;
}
export interface LengthChoice extends Named {
  readonly kind: 'length';
  readonly default: Millimetres;
  readonly min: Millimetres;
  readonly max: Millimetres;
}
export interface NumberChoice extends Named {
  readonly kind: 'number';
  /** What stands behind the number: '%', '°', 'panels'. */
  readonly unit: string;
  readonly default: number;
  readonly min: number;
  readonly max: number;
  /** Only whole numbers. */
  readonly whole: boolean;
}
export interface OneOfChoice extends Named {
  readonly kind: 'oneOf';
  readonly options: readonly { readonly value: string; readonly word: string }[];
  readonly default: string;
}
export interface YesNoChoice extends Named {
  readonly kind: 'yesNo';
  readonly default: boolean;
}
export type Choice = LengthChoice | NumberChoice | OneOfChoice | YesNoChoice;

/** Values by the ids of the choices: millimetres, numbers, words, yes or no. */
export type ChoiceValues = Readonly<Record<string, number | string | boolean>>;

/** The values of one draft, whole and within their ranges. */
export interface Chosen {
  /** A length or a number. */
  number(id: string): number;
  word(id: string): string;
  yes(id: string): boolean;
  readonly values: ChoiceValues;
}

/** A choice that can't be taken, and why. */
export interface ChoiceFault {
  readonly id: string;
  readonly message: string;
}

export const length = (
  id: string,
  label: string,
  says: string,
  range: { readonly default: Millimetres; readonly min: Millimetres; readonly max: Millimetres }
): LengthChoice => ({ kind: 'length', id, label, says, ...range });

export const count = (
  id: string,
  label: string,
  says: string,
  range: { readonly default: number; readonly min: number; readonly max: number; readonly unit?: string }
): NumberChoice => ({ kind: 'number', id, label, says, unit: '', whole: true, ...range });

export const amount = (
  id: string,
  label: string,
  says: string,
  range: { readonly default: number; readonly min: number; readonly max: number; readonly unit: string }
): NumberChoice => ({ kind: 'number', id, label, says, whole: false, ...range });

export const oneOf = (
  id: string,
  label: string,
  says: string,
  options: readonly (readonly [value: string, word: string])[],
  standard = options[0]![0]
): OneOfChoice => ({
  kind: 'oneOf',
  id,
  label,
  says,
  options: options.map(([value, word]) => ({ value, word })),
  default: standard
});

export const yesNo = (id: string, label: string, says: string, standard: boolean): YesNoChoice => ({
  kind: 'yesNo',
  id,
  label,
  says,
  default: standard
});

/** The choices as they stand without anybody's deciding. */
export function defaultsOf(choices: readonly Choice[]): ChoiceValues {
  return Object.fromEntries(choices.map((choice) => [choice.id, choice.default]));
}

/** A value as it is read: a length in `unit`, a number with what stands behind it, the word of an option, yes or no. */
export function valueWords(choice: Choice, value: number | string | boolean, unit: LengthUnit): string {
  switch (choice.kind) {
    case 'length':
      return formatLength(Number(value), unit);
    case 'number':
      return `${formatDecimal(Number(value), 2)} ${choice.unit}`.trim();
    case 'oneOf':
      return choice.options.find((option) => option.value === value)?.word ?? String(value);
    case 'yesNo':
      return value === true ? 'yes' : 'no';
  }
}

/**
 * `values` over the defaults, each within its range; or every one that is not, with what is allowed. Values of choices that the draft
 * does not have are left out.
 */
export function readChoices(
  choices: readonly Choice[],
  values: Readonly<Record<string, unknown>>
): { readonly chosen: Chosen; readonly faults?: never } | { readonly faults: readonly ChoiceFault[] } {
  const read: Record<string, number | string | boolean> = {};
  const faults: ChoiceFault[] = [];
  for (const choice of choices) {
    const value = values[choice.id] ?? choice.default;
    const message = faultOf(choice, value);
    if (message) faults.push({ id: choice.id, message });
    else read[choice.id] = value as number | string | boolean;
  }
  if (faults.length > 0) return { faults };
  return {
    chosen: {
      values: read,
      number: (id) => read[id] as number,
      word: (id) => read[id] as string,
      yes: (id) => read[id] as boolean
    }
  };
}

function faultOf(choice: Choice, value: unknown): string | null {
  switch (choice.kind) {
    case 'length':
    case 'number': {
      const unit = choice.kind === 'length' ? 'mm' : choice.unit;
      if (typeof value !== 'number' || !Number.isFinite(value)) return `${choice.label} is a number.`;
      if (choice.kind === 'number' && choice.whole && !Number.isInteger(value))
        return `${choice.label} is a whole number, got ${value}.`;
      // Typed inches come back a hair off.
      if (value < choice.min - 1e-6 || value > choice.max + 1e-6)
        return `${choice.label} is from ${round(choice.min)} to ${round(choice.max)} ${unit}, got ${round(value)}.`.replace(
          ' ,',
          ','
        );
      return null;
    }
    case 'oneOf':
      return choice.options.some((option) => option.value === value)
        ? null
        : `${choice.label} is one of: ${choice.options.map(({ word }) => word).join(', ')}.`;
    case 'yesNo':
      return typeof value === 'boolean' ? null : `${choice.label} is yes or no.`;
  }
}

const round = (value: number): number => Math.round(value * 100) / 100;
