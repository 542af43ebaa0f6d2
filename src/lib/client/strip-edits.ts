import { withEnds } from '$lib/cloth/given-strip';
import { sideUp, type Strip } from '$lib/cloth/strip';
import type { Edit } from '$lib/lay/edit';
import type { LayDocument } from '$lib/lay/document';

/*
 * What a person sets about the cloth of one lay: the room for the blade, the ends, the reserve, the length at hand.
 */

/** Room between two cut lines by what cuts, in millimetres. Common practice, no published source. */
export const BLADES = [
  { id: 'shears', label: 'Shears or rotary cutter', clearance: 3 },
  { id: 'knife', label: 'Straight knife', clearance: 5 },
  { id: 'none', label: 'None: pieces share a cut', clearance: 0 }
] as const;

/** What is lost at an end of the cloth, and at one that must be squared first. Common practice, no published source. */
export const PLAIN_END = 20;
export const SQUARED_END = 40;

/** What can be set. */
export type StripSettings = Pick<
  Strip,
  'clearance' | 'endAllowance' | 'reserve' | 'length' | 'splices' | 'wholeRepeats'
> & {
  readonly sideUp: 'right' | 'wrong';
};

export function settingsOf(strip: Strip): StripSettings {
  const { clearance, endAllowance, reserve, length, splices, wholeRepeats } = strip;
  return { clearance, endAllowance, reserve, length, splices, wholeRepeats, sideUp: sideUp(strip) };
}

/** The lay with other settings of its cloth. Turning the cloth over turns every layer. */
export function setStrip(document: LayDocument, settings: StripSettings): Edit {
  const before = settingsOf(document.strip);
  if (JSON.stringify(before) === JSON.stringify(settings)) return { refused: 'Nothing was changed.' };
  const { sideUp: side, endAllowance, length, ...fields } = settings;
  const ends = withEnds(document.strip, endAllowance);
  // A roll or remnant has the length that it has.
  const laid = ends.given ? ends : { ...ends, length };
  const spread =
    side === before.sideUp
      ? document.strip.spread
      : document.strip.spread.map((zone) => ({
          ...zone,
          layers: zone.layers.map((layer) => ({
            ...layer,
            sideUp: layer.sideUp === 'right' ? ('wrong' as const) : ('right' as const)
          }))
        }));
  return {
    document: { ...document, strip: { ...laid, ...fields, spread } },
    said:
      side === before.sideUp
        ? 'The cloth of this lay is set anew.'
        : `The cloth lies ${side} side up now: every piece is of the other hand.`
  };
}
