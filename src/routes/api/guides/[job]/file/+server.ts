import { api } from '$lib/server/guard';
import * as guides from '$lib/server/guides';
import type { RequestHandler } from './$types';

/** The PDF of a guide, to be saved: never shown as a page of ours. */
export const GET: RequestHandler = api('guides: print', async (scope, { params }) => {
  const { name, bytes } = await guides.file(scope, params.job!);
  return new Response(new Uint8Array(bytes), {
    headers: {
      'content-type': 'application/pdf',
      'content-length': String(bytes.length),
      'content-disposition': `attachment; filename="cutting-guide.pdf"; filename*=UTF-8''${encodeURIComponent(name)}`,
      'cache-control': 'private, no-store',
      'x-content-type-options': 'nosniff'
    }
  });
});
