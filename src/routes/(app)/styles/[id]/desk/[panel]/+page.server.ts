import { error } from '@sveltejs/kit';
import { allow, orErrorPage } from '$lib/server/guard';
import * as panelDrafts from '$lib/server/panel-drafts';
import * as styles from '$lib/server/styles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'styles: change');
  const style = await orErrorPage(styles.read(scope, event.params.id));
  const copy = await orErrorPage(panelDrafts.read(scope, style.id));
  if (!copy.document.panels.some(({ id }) => id === event.params.panel))
    error(404, 'There is no such panel in this style.');
  return {
    style: { id: style.id, name: style.name, latest: style.versions[0]!.number },
    panel: event.params.panel,
    copy,
    user: scope.user,
    unit: event.locals.studio!.lengthUnit
  };
};
