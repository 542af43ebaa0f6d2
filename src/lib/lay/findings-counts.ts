import { enlargesUnequally } from '$lib/cloth/shrinkage';
import { spreadKind } from '$lib/cloth/spread';
import type { Hand } from '$lib/pattern/panel';
import type { LayDocument, LayPlacement, NeedHand } from './document';
import { balance, panelOfPlacement, type LoosePiece, type Surplus } from './needs';
import { panelKey, panelOf, type LayPanel, type PanelBook } from './panel-book';
import { CLEARANCE_SLACK } from './findings-between';
import type { PlacedPiece } from './placed';
import { readingsOf } from './readings';
import type { Finding, FindingKind } from './verdict';
import { millimetres, nameOf, pieceName, pieces } from './wording';
import { flipIsFree, handAsLaid, otherHand, yields } from './yields';

/** What is wrong with the count of pieces: missing, surplus, of the wrong hand, unpaired, not known, not confirmed. */
export function findingsOfCounts(
  document: LayDocument,
  book: PanelBook,
  placed: readonly PlacedPiece[]
): Finding[] {
  const { loose, surplus } = balance(document, book);
  const { wrong, missing, extra } = wrongHands(loose, surplus);
  return [
    ...unknownPanels(document, book),
    ...wrong.map((one) => wrongHand(document, book, one)),
    ...missingPieces(document, book, missing),
    ...extra.map((one) => surplusPiece(document, book, one)),
    ...unconfirmedGrain(document, book),
    ...shearedPanels(document, book),
    ...notOnThisLength(document, book),
    ...unpaired(document, book, placed)
  ];
}

const nowhere = { measure: null, place: null, region: [], area: null, box: null } as const;

function labelOf(document: LayDocument, garment: string): string | undefined {
  return document.garments.find(({ id }) => id === garment)?.label;
}

function panelNamed(
  document: LayDocument,
  book: PanelBook,
  garment: string,
  panel: string
): LayPanel | undefined {
  return panelOfPlacement(document, book, { garment, panel });
}

/** Surplus of one hand and a loose piece of the other are one mistake: the piece lies the wrong way up. */
function wrongHands(
  loose: readonly LoosePiece[],
  surplus: readonly Surplus[]
): { wrong: Surplus[]; missing: LoosePiece[]; extra: Surplus[] } {
  const missing = [...loose];
  const wrong: Surplus[] = [];
  const extra: Surplus[] = [];
  for (const one of surplus) {
    let left = one.count;
    while (left > 0) {
      const at = missing.findIndex(
        (piece) =>
          piece.garment === one.garment && piece.panel === one.panel && piece.hand === otherHand(one.hand)
      );
      if (at < 0) break;
      missing.splice(at, 1);
      left--;
    }
    if (left < one.count) wrong.push({ ...one, count: one.count - left });
    if (left > 0) extra.push({ ...one, count: left });
  }
  return { wrong, missing, extra };
}

function wrongHand(document: LayDocument, book: PanelBook, one: Surplus): Finding {
  const panel = panelNamed(document, book, one.garment, one.panel);
  const name = pieceName(panel, 'either', labelOf(document, one.garment));
  return {
    ...nowhere,
    kind: 'wrong-hand',
    severity: 'stops',
    placements: [one.placement],
    subject: { garment: one.garment, panel: one.panel, hand: otherHand(one.hand) },
    measure: { value: one.count, unit: 'pieces' },
    message: `${name} lies as a ${one.hand} piece; a ${otherHand(one.hand)} one is needed. Flip it.`
  };
}

function missingPieces(document: LayDocument, book: PanelBook, missing: readonly LoosePiece[]): Finding[] {
  const counts = new Map<string, { piece: LoosePiece; count: number }>();
  for (const piece of missing) {
    const key = `${piece.garment}/${piece.panel}/${piece.hand}`;
    const known = counts.get(key);
    if (known) known.count++;
    else counts.set(key, { piece, count: 1 });
  }
  return [...counts.values()].map(({ piece, count }) => {
    const panel = panelNamed(document, book, piece.garment, piece.panel);
    const name = pieceName(panel, piece.hand, labelOf(document, piece.garment));
    return {
      ...nowhere,
      kind: 'missing' as const,
      severity: 'stops' as const,
      placements: [],
      subject: piece,
      measure: { value: count, unit: 'pieces' as const },
      message:
        count === 1
          ? `${name} is not on the cloth yet.`
          : `${name}: ${pieces(count)} are not on the cloth yet.`
    };
  });
}

function surplusPiece(document: LayDocument, book: PanelBook, one: Surplus): Finding {
  const placement = document.placements.find(({ id }) => id === one.placement)!;
  return {
    ...nowhere,
    kind: 'surplus',
    severity: 'stops',
    placements: [one.placement],
    subject: { garment: one.garment, panel: one.panel, hand: one.hand },
    measure: { value: one.count, unit: 'pieces' },
    ...(oneHanded(document, book, placement, one) ?? {
      message: `${nameOf(document, book, placement)} is on the cloth, but the order asks for no more of it: ${pieces(one.count)} too many.`
    })
  };
}

/** A piece that is asked for by one hand only, under a layer that gives the other one, too. */
function oneHanded(
  document: LayDocument,
  book: PanelBook,
  placement: LayPlacement,
  one: Surplus
): Pick<Finding, 'offer' | 'message'> | null {
  const panel = panelNamed(document, book, one.garment, one.panel);
  if (!panel || yields(placement, panel, document.strip).reduce((sum, { count }) => sum + count, 0) < 2)
    return null;
  return {
    offer: 'open-cloth',
    message: `${nameOf(document, book, placement)} lies where the cloth has several layers: ${pieces(one.count)}${flipIsFree(panel, document.strip) ? '' : ` (${one.hand})`} too many would be cut. Lay it on a single layer, or open the cloth.`
  };
}

/** Placements and needs whose panel is not in the book: nobody knows their outline. */
function unknownPanels(document: LayDocument, book: PanelBook): Finding[] {
  const finding = (garment: string, panel: string, hand: NeedHand, placements: string[]): Finding => ({
    ...nowhere,
    kind: 'unknown-panel',
    severity: 'stops',
    placements,
    subject: { garment, panel, hand },
    message: `${placements.length > 0 ? 'A piece on the cloth' : 'A needed piece'}${
      labelOf(document, garment) ? ` of ${labelOf(document, garment)}` : ''
    } is of no panel that this lay knows.`
  });
  const known = (garment: string, panel: string): boolean =>
    panelNamed(document, book, garment, panel) !== undefined;
  return [
    ...document.placements
      .filter(({ garment, panel }) => !known(garment, panel))
      .map(({ id, garment, panel }) => finding(garment, panel, 'either', [id])),
    ...document.needs
      .filter(({ garment, panel }) => !known(garment, panel))
      .map(({ garment, panel, hand }) => finding(garment, panel, hand, []))
  ];
}

/** Panels of this lay whose grain line is still a guess of the import, each once. */
function unconfirmedGrain(document: LayDocument, book: PanelBook): Finding[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const found = new Map<string, Finding>();
  for (const { garment: id, panel: panelId } of [...document.needs, ...document.placements]) {
    const garment = garments.get(id);
    const panel = panelOf(book, garment, panelId);
    if (!garment || !panel || panel.grainConfirmed) continue;
    const key = panelKey(garment.styleVersion, panelId);
    if (found.has(key)) continue;
    found.set(key, {
      ...nowhere,
      kind: 'grain-unconfirmed',
      severity: 'stops',
      placements: document.placements
        .filter(
          (placement) =>
            placement.panel === panelId &&
            garments.get(placement.garment)?.styleVersion === garment.styleVersion
        )
        .map((placement) => placement.id),
      subject: { garment: id, panel: panelId, hand: 'either' },
      message: `The grain line of ${panel.shape.name} is a guess of the import. Confirm it on the style first.`
    });
  }
  return [...found.values()];
}

/**
 * What a roll or remnant can't be: an odd one is laid open, in one ply, and plies and splices take no more than there is. That
 * no single piece lies beyond its end is said of the piece.
 */
function notOnThisLength(document: LayDocument, book: PanelBook): Finding[] {
  const { strip } = document;
  const { given, length, endAllowance } = strip;
  if (!given || length === null) return [];
  const found: Finding[] = [];
  const stop = (kind: FindingKind, value: number | null, message: string): number =>
    found.push({
      ...nowhere,
      kind,
      severity: 'stops',
      placements: [],
      subject: null,
      measure: value === null ? null : { value, unit: 'mm' },
      message
    });
  if (given.outline && spreadKind(strip) !== 'open')
    stop(
      'outside-edge',
      null,
      `${given.name} has an odd outline: it can only be laid open, in a single ply.`
    );
  const whole = length + endAllowance.start + endAllowance.end;
  const { lengthUsed, start, end, furtherPlies, splices } = readingsOf(document, book).clothToBuy;
  const taken = lengthUsed + start + end + furtherPlies + splices;
  if (furtherPlies + splices > 0 && taken > whole + CLEARANCE_SLACK)
    stop(
      'outside-length',
      taken - whole,
      `Plies, ends and splices take ${millimetres(taken)}; ${given.name} has ${millimetres(whole)}.`
    );
  return found;
}

/** Bias panels on cloth for which panels are enlarged more one way than the other: they would come out sheared. */
function shearedPanels(document: LayDocument, book: PanelBook): Finding[] {
  if (!enlargesUnequally(document.strip.shrinkage)) return [];
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const found = new Map<string, Finding>();
  for (const { garment: id, panel: panelId } of document.needs) {
    const garment = garments.get(id);
    const panel = panelOf(book, garment, panelId);
    if (!garment || panel?.turns !== 'bias') continue;
    const key = panelKey(garment.styleVersion, panelId);
    if (!found.has(key))
      found.set(key, {
        ...nowhere,
        kind: 'shrinkage',
        severity: 'stops',
        placements: document.placements
          .filter(
            (one) => one.panel === panelId && garments.get(one.garment)?.styleVersion === garment.styleVersion
          )
          .map((one) => one.id),
        subject: { garment: id, panel: panelId, hand: 'either' },
        message: `${panel.shape.name} is cut on the bias, and this cloth shrinks unequally along warp and weft: enlarging would shear it. Shrink the cloth before it is laid.`
      });
  }
  return [...found.values()];
}

/**
 * Pairs that do not lie half left, half right. On cloth with a right and a wrong side such a piece is of the wrong hand,
 * which stops. On cloth with both sides alike it serves once it is turned over, so this only warns: whoever bundles has
 * to know.
 */
function unpaired(document: LayDocument, book: PanelBook, placed: readonly PlacedPiece[]): Finding[] {
  const pairs = new Map<string, { first: PlacedPiece; all: PlacedPiece[] }>();
  for (const piece of placed) {
    const { panel, placement } = piece;
    if (!panel.paired || panel.shape.symmetric || !flipIsFree(panel, document.strip)) continue;
    const key = `${placement.garment}/${placement.panel}`;
    const known = pairs.get(key);
    if (known) known.all.push(piece);
    else pairs.set(key, { first: piece, all: [piece] });
  }
  return [...pairs.values()].flatMap(({ first, all }): Finding[] => {
    const { panel, placement } = first;
    if (all.length < panel.howMany) return [];
    const lefts = all.filter((piece) => handAsLaid(piece.placement, panel, document.strip) === 'left');
    const turnOver = Math.abs(lefts.length - all.length / 2);
    if (turnOver < 1) return [];
    const many: Hand = lefts.length > all.length / 2 ? 'left' : 'right';
    return [
      {
        ...nowhere,
        kind: 'unpaired' as FindingKind,
        severity: 'warns',
        placements: all.map((piece) => piece.placement.id),
        subject: { garment: placement.garment, panel: placement.panel, hand: otherHand(many) },
        measure: { value: Math.floor(turnOver), unit: 'pieces' },
        message: `${pieceName(panel, 'either', labelOf(document, placement.garment))} lies with more ${many} pieces than ${otherHand(many)} ones. Both sides of the cloth are alike: turn ${pieces(Math.floor(turnOver))} over when bundling.`
      }
    ];
  });
}
