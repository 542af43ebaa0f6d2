import { allow } from '$lib/server/guard';
import * as imports from '$lib/server/imports';
import { readListing } from '$lib/server/listing';
import { may } from '$lib/server/permissions';
import * as styles from '$lib/server/styles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'styles: see');
  const params = event.url.searchParams;
  const archived = params.get('show') === 'archived';
  const mayChange = may(scope.role, 'styles: change');
  return {
    styles: await styles.list(scope, readListing(params, styles.styleSorts, 'name'), { archived }),
    archived,
    mayChange,
    waiting: mayChange ? await imports.list(scope) : [],
    timeZone: event.locals.studio!.timeZone
  };
};
