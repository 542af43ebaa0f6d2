import { z } from 'zod';
import { clothRoles, type ClothRole } from '$lib/pattern/panel';
import { line } from './forms';
import type { OrderItemInput } from './order-items';
import { stages, type OrderInput } from './orders';

const quantity = z.coerce
  .number({ error: 'How many garments?' })
  .int('Whole garments only.')
  .min(1, 'At least one.')
  .max(200, 'At most 200 in one line.');

const day = z
  .string()
  .trim()
  .default('')
  .refine((text) => {
    if (text === '') return true;
    const date = new Date(`${text}T00:00:00Z`);
    return (
      /^\d{4}-\d{2}-\d{2}$/.test(text) && !Number.isNaN(date.valueOf()) && date.toISOString().startsWith(text)
    );
  }, 'A day is written like 2026-05-31.')
  .transform((text) => text || null);

/** The version of the order that the person looked at. */
const version = z.coerce.number().int().min(1);

const head = {
  clientName: line('Who is it for?'),
  dueDate: day,
  stage: z.enum(stages, 'Choose a stage.').default('enquiry'),
  note: z.string().trim().max(2000, 'At most 2000 characters, please.').default('')
};

/** The head of a known order. */
export const orderForm = z
  .object({ ...head, version })
  .transform(({ version, ...order }) => ({ version, order: order satisfies OrderInput }));

const emptyAsAbsent = (value: unknown) => (value === '' ? undefined : value);

/** A new order, with its first line if a style was chosen. */
export const newOrderForm = z
  .object({
    ...head,
    style: z.string().max(64).default(''),
    label: z.string().trim().max(60, 'At most 60 characters, please.').default(''),
    quantity: z.preprocess(emptyAsAbsent, quantity.default(1))
  })
  .transform(
    ({ style, label, quantity, ...order }): { order: OrderInput; lines: readonly OrderItemInput[] } => ({
      order,
      lines: style ? [{ styleVersionId: style, label, quantity, cloths: {} }] : []
    })
  );

/** A line of an order: `cloth.main`, `cloth.lining` … hold cloth ids, empty while none is chosen. */
export const lineForm = z
  .looseObject({
    version,
    style: z.string({ error: 'Choose a style.' }).min(1, 'Choose a style.').max(64),
    label: z.string().trim().max(60, 'At most 60 characters, please.').default(''),
    quantity
  })
  .transform((form) => {
    const cloths: Partial<Record<ClothRole, string>> = {};
    for (const role of clothRoles) {
      const id = form[`cloth.${role}`];
      if (typeof id === 'string' && id !== '') cloths[role] = id;
    }
    const item: OrderItemInput = {
      styleVersionId: form.style,
      label: form.label,
      quantity: form.quantity,
      cloths
    };
    return { version: form.version, item };
  });
