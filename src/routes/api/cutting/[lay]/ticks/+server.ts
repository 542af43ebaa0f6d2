import { z } from 'zod';
import * as cutting from '$lib/server/cutting';
import { api, readBody } from '$lib/server/guard';

const body = z.object({
  ticks: z
    .array(z.object({ placement: z.string().min(1).max(64), cut: z.boolean() }))
    .min(1)
    .max(5000)
});

export const POST = api('lays: cut', async (scope, event) => {
  const { ticks } = await readBody(event.request, body);
  await cutting.tick(scope, event.params.lay!, ticks);
  return { taken: ticks.length };
});
