import { fail, redirect } from '@sveltejs/kit';
import { LIMITS } from '$lib/interchange/limits';
import { allow, orErrorPage } from '$lib/server/guard';
import * as imports from '$lib/server/imports';
import { Problem } from '$lib/server/problem';
import * as styles from '$lib/server/styles';
import type { Actions, PageServerLoad } from './$types';

const MOST_FILES = 20;

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'styles: change');
  const id = event.url.searchParams.get('style');
  const style = id === null ? null : await orErrorPage(styles.read(scope, id));
  return {
    style: style && { id: style.id, name: style.name },
    waiting: await imports.list(scope),
    limitMb: LIMITS.bytes / 1024 / 1024,
    mostFiles: MOST_FILES
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'styles: change');
    const form = await event.request.formData();
    const styleId = form.get('style');
    const uploads = form
      .getAll('files')
      .filter((file): file is File => file instanceof File && file.name !== '');
    if (uploads.length === 0) return fail(400, { refused: ['Choose at least one SVG or DXF file.'] });
    if (uploads.length > MOST_FILES)
      return fail(400, { refused: [`At most ${MOST_FILES} files at once; these are ${uploads.length}.`] });
    const ids: string[] = [];
    const refused: string[] = [];
    for (const upload of uploads) {
      try {
        const bytes =
          upload.size > LIMITS.bytes
            ? new Uint8Array(LIMITS.bytes + 1)
            : new Uint8Array(await upload.arrayBuffer());
        const style = typeof styleId === 'string' && styleId !== '' ? styleId : null;
        ids.push(await imports.create(scope, { name: upload.name, bytes }, style));
      } catch (refusal) {
        if (!(refusal instanceof Problem)) throw refusal;
        refused.push(refusal.detail);
      }
    }
    if (refused.length === 0 && ids.length === 1) redirect(303, `/styles/imports/${ids[0]}`);
    if (refused.length === 0) redirect(303, '/styles/new?uploaded');
    return fail(400, { refused });
  }
};
