import * as guides from '$lib/server/guides';
import * as layRevisions from '$lib/server/lay-revisions';
import { may } from '$lib/server/permissions';
import type { PageServerLoad } from './$types';

/**
 * What a scanned ticket says. Whether the paper is still good is told to whoever holds it, signed in or not, in words
 * that name nobody; which lay it is, only to the people of its studio.
 */
export const load: PageServerLoad = async (event) => {
  const code = event.params.hash.toLowerCase();
  const { scope } = event.locals;
  const verdict = await guides.verdictOnPaper(code);
  const [paper] =
    verdict !== 'unknown' && scope && may(scope.role, 'lays: see')
      ? await layRevisions.byHash(scope, code)
      : [];
  event.setHeaders({ 'cache-control': 'no-store', 'x-robots-tag': 'noindex' });
  return {
    code,
    verdict,
    paper: paper
      ? {
          layId: paper.layId,
          layName: paper.layName,
          number: paper.number,
          name: paper.name,
          currentNumber: paper.currentNumber
        }
      : null,
    signedIn: scope !== null
  };
};
