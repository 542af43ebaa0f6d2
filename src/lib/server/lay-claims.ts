import type { Strip } from '$lib/cloth/strip';
import type { LayDocument } from '$lib/lay/document';
import { panelKey } from '$lib/lay/panel-book';
import { same } from '$lib/lay/same';
import { stripWith, type LayFacts } from './lay-facts';
import { Problem } from './problem';

/*
 * What a posted lay may say. The person decides where the pieces lie and what they measured on the table: usable width,
 * length, flaws, spread, side up, repeat, end allowances, reserve, clearance. Garments, needs, full width, nap, sides, shrinking and
 * the step of buying are the order's and the cloth's; on a roll or remnant so are length, width, edge and flaws.
 */

const notTheirs: readonly (keyof Strip)[] = [
  'fullWidth',
  'nap',
  'sidesAlike',
  'buyStep',
  'shrinkage',
  'given'
];
/** What a roll or remnant settles as well, where the lay is made on one. */
const ofTheLength: readonly (keyof Strip)[] = ['length', 'usableWidth', 'flaws'];

/**
 * Refuses (400) a posted document that claims what is the server's to say, or that names anything that is not of this
 * order. Gives 'facts-changed' when it only repeats what was stored before the order or the cloth changed: then the
 * person has to take over the new facts.
 */
export function refuseWhatIsNotTheirs(
  posted: LayDocument,
  current: LayDocument,
  stored: LayDocument,
  facts: LayFacts
): 'fits' | 'facts-changed' {
  let changed = false;
  const compare = (what: string, got: unknown, now: unknown, before: unknown): void => {
    if (same(got, now)) return;
    if (same(got, before)) changed = true;
    else
      throw new Problem(
        400,
        'not-of-this-lay',
        `The ${what} can't be changed here`,
        `The ${what} of a lay come from its order and cloth. Change them there.`,
        { field: what }
      );
  };
  compare('garments', posted.garments, current.garments, stored.garments);
  compare('needs', posted.needs, current.needs, stored.needs);
  // On a measured length the ends that the person chose decide where the lay, its flaws and its edge begin.
  const now = facts.length
    ? stripWith({ ...current.strip, endAllowance: posted.strip.endAllowance }, facts)
    : current.strip;
  for (const field of facts.length ? [...notTheirs, ...ofTheLength] : notTheirs)
    compare(field, posted.strip[field], now[field], stored.strip[field]);
  if (changed) return 'facts-changed';
  refuseStrangers(posted, stored, facts);
  return 'fits';
}

/**
 * Refuses placements and match points of a garment or panel that is not of this lay. What was stored while the order still
 * asked for its garment may stay until the person takes it off the cloth.
 */
function refuseStrangers(posted: LayDocument, stored: LayDocument, facts: LayFacts): void {
  const garments = new Map(facts.garments.map((garment) => [garment.id, garment]));
  const belongs = (garmentId: string, panel: string): boolean => {
    const garment = garments.get(garmentId);
    const known = garment && facts.book[panelKey(garment.styleVersion, panel)];
    return known !== undefined && facts.takes(garment!, known);
  };
  const pointsOf = ({ rules }: LayDocument) => rules.matchGroups.flatMap(({ points }) => points);
  const before = new Set([
    ...stored.placements.map(({ id, garment, panel }) => `${id}/${garment}/${panel}`),
    ...pointsOf(stored).map(({ point, garment, panel }) => `point ${point}/${garment}/${panel}`)
  ]);
  const stranger =
    posted.placements.find(
      ({ id, garment, panel }) => !belongs(garment, panel) && !before.has(`${id}/${garment}/${panel}`)
    ) ??
    pointsOf(posted).find(
      ({ point, garment, panel }) =>
        !belongs(garment, panel) && !before.has(`point ${point}/${garment}/${panel}`)
    );
  if (stranger)
    throw new Problem(
      400,
      'not-of-this-lay',
      'A piece is not of this lay',
      `The order asks this cloth for no panel ${stranger.panel} of garment ${stranger.garment}.`,
      { field: 'placements' }
    );
}
