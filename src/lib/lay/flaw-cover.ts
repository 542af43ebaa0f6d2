import type { LayDocument, LayPlacement } from './document';
import type { Edit } from './edit';
import { mayCoverFlaws } from './flaw-room';

/**
 * Lets the panel of `placement` lie over flaws, because nobody will see it there (a facing, a pocket bag), or forbids it again.
 * It holds for every copy of the panel in this lay.
 */
export function toggleCover(document: LayDocument, placement: LayPlacement, name: string): Edit {
  const styleVersion = document.garments.find(({ id }) => id === placement.garment)?.styleVersion;
  if (styleVersion === undefined) return { refused: 'Nobody knows what garment this piece is of.' };
  const may = mayCoverFlaws(document, placement);
  const others = document.rules.mayCoverFlaws.filter(
    (one) => one.panel !== placement.panel || one.styleVersion !== styleVersion
  );
  return {
    document: {
      ...document,
      rules: {
        ...document.rules,
        mayCoverFlaws: may ? others : [...others, { styleVersion, panel: placement.panel }]
      }
    },
    said: may ? `${name} may not lie over flaws.` : `${name} may lie over flaws of the cloth.`
  };
}
