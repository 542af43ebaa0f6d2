import type { RequestEvent } from './$types';
import * as files from '$lib/server/files';
import { api } from '$lib/server/guard';

/** An uploaded file as it came, as a download. */
export const GET = api<RequestEvent>('styles: see', async (scope, { params }) =>
  files.download(await files.read(scope, params.id))
);
