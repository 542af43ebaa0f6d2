import { config } from '$lib/server/config';
import type { LayoutServerLoad } from './$types';

/** In the demo the pages say where its mails can be read. */
export const load: LayoutServerLoad = () => ({ demoMailPage: config.demoMailPage });
