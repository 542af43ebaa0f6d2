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
export type StripSettings = Pick<Strip, 'clearance' | 'endAllowance' | 'reserve' | 'buyStep' | 'length'> & {
  readonly sideUp: 'right' | 'wrong';
};

export function settingsOf(strip: Strip): StripSettings {
  const { clearance, endAllowance, reserve, buyStep, length } = strip;
  return { clearance, endAllowance, reserve, buyStep, length, sideUp: sideUp(strip) };
}

/** The lay with other settings of its cloth. Turning the cloth over turns every layer. */
export function setStrip(document: LayDocument, settings: StripSettings): Edit {
  const before = settingsOf(document.strip);
  if (JSON.stringify(before) === JSON.stringify(settings)) return { refused: 'Nothing was changed.' };
  const { sideUp: side, ...fields } = settings;
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
    document: { ...document, strip: { ...document.strip, ...fields, spread } },
    said:
      side === before.sideUp
        ? 'The cloth of this lay is set anew.'
        : `The cloth lies ${side} side up now: every piece is of the other hand.`
  };
}
