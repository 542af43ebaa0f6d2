import type { RequestEvent } from './$types';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as files from '$lib/server/files';
import { api } from '$lib/server/guard';
import { pictureResponse } from '$lib/server/pictures';

/** The photo of a roll or remnant. */
export const GET = api<RequestEvent>('cloths: see', async (scope, { params }) =>
  pictureResponse(await files.read(scope, await clothLengths.photoFile(scope, params.id)))
);
