import { allow, orErrorPage } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import { may } from '$lib/server/permissions';
import { isReplaced } from '$lib/server/replaced-panels';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: see');
  return {
    lay: await orErrorPage(lays.read(scope, event.params.id)),
    replaced: await isReplaced(scope, event.params.id),
    user: scope.user,
    unit: event.locals.studio!.lengthUnit,
    mayRelease: may(scope.role, 'lays: release')
  };
};
