import { redirect } from '@sveltejs/kit';
import { may } from '$lib/server/permissions';
import { roleWords } from '$lib/server/door-mails';
import type { LayoutServerLoad } from './$types';

/** Who and where the shell shows. Each page still asks for its own permission. */
export const load: LayoutServerLoad = ({ locals, url }) => {
  const { person, scope, studio } = locals;
  if (!person.user) redirect(303, `/sign-in?next=${encodeURIComponent(url.pathname + url.search)}`);
  const places = scope
    ? [
        { href: '/orders', word: 'Orders' },
        { href: '/lays', word: 'Lays' },
        { href: '/cutting', word: 'Cutting' },
        ...(may(scope.role, 'measurements: see')
          ? [
              { href: '/clients', word: 'Clients' },
              { href: '/drafts', word: 'Drafts' }
            ]
          : []),
        { href: '/styles', word: 'Styles' },
        { href: '/cloths', word: 'Cloths' },
        ...(may(scope.role, 'people: manage') ? [{ href: '/people', word: 'People' }] : []),
        { href: '/help', word: 'Help' }
      ]
    : [{ href: '/help', word: 'Help' }];
  return {
    places,
    personName: person.user.name,
    manages: scope !== null && may(scope.role, 'studio: manage'),
    role: scope ? roleWords[scope.role] : null,
    studio: studio && {
      name: studio.name,
      currency: studio.currency,
      lengthUnit: studio.lengthUnit,
      timeZone: studio.timeZone
    }
  };
};
