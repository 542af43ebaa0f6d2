import { z } from 'zod';
import { line } from './forms';

/** Name and contact of a client. */
export const clientForm = z.object({
  name: line('Who is it?', 120),
  email: z
    .string()
    .trim()
    .toLowerCase()
    .max(254, 'This is longer than an e-mail address can be.')
    .default('')
    .refine((text) => text === '' || z.email().safeParse(text).success, 'This is not an e-mail address.'),
  phone: z.string().trim().max(40, 'At most 40 characters, please.').default(''),
  note: z.string().trim().max(4000, 'At most 4000 characters, please.').default('')
});

export const knownClientForm = clientForm.extend({ version: z.coerce.number().int().min(1) });
