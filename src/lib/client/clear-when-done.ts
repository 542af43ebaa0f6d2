import type { SubmitFunction } from '@sveltejs/kit';

/**
 * For `use:enhance` of a form that comes back to its own page when it is done: what was typed is then cleared, as it
 * would be without scripts. When it was refused everything stays.
 */
export const clearWhenDone: SubmitFunction =
  ({ formElement }) =>
  async ({ result, update }) => {
    if (result.type === 'redirect') formElement.reset();
    await update();
  };
