import type { Strip } from '$lib/cloth/strip';
import type { Millimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import type { Edit } from './edit';
import type { MatchGroup } from './matching';
import { panelKey, panelOf, type PanelBook } from './panel-book';

/*
 * The rules of one lay as a person sets them: what must match, where the repeat begins on the table, which panels may lie over a flaw.
 */

/** A match point of a garment that a group may ask for. */
export interface Matchable {
  readonly garment: string;
  readonly panel: string;
  readonly point: string;
  /** 'Front · Bust line, of Ada bodice 38 · 2' */
  readonly words: string;
}

/** Every match point of the panels that a lay needs, in the order of its needs. */
export function matchables(document: Pick<LayDocument, 'needs' | 'garments'>, book: PanelBook): Matchable[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const seen = new Set<string>();
  return document.needs.flatMap(({ garment, panel: id }) => {
    const panel = panelOf(book, garments.get(garment), id);
    if (!panel || seen.has(`${garment}/${id}`)) return [];
    seen.add(`${garment}/${id}`);
    return panel.shape.matchPoints.map((point) => ({
      garment,
      panel: id,
      point: point.id,
      words: `${panel.shape.name} · ${point.name || 'match point'}, of ${garments.get(garment)!.label}`
    }));
  });
}

/** Each panel that a lay needs, once. */
export function panelsNeeded(
  document: Pick<LayDocument, 'needs' | 'garments'>,
  book: PanelBook
): { readonly styleVersion: string; readonly panel: string; readonly name: string }[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const found = new Map<string, { styleVersion: string; panel: string; name: string }>();
  for (const need of document.needs) {
    const garment = garments.get(need.garment);
    const panel = panelOf(book, garment, need.panel);
    if (garment && panel)
      found.set(panelKey(garment.styleVersion, need.panel), {
        styleVersion: garment.styleVersion,
        panel: need.panel,
        name: panel.shape.name
      });
  }
  return [...found.values()];
}

/** Adds a group of points that must fall on the same place of the repeat. */
export function addMatchGroup(document: LayDocument, group: MatchGroup): Edit {
  if (group.points.length === 0) return { refused: 'Choose the points that must match.' };
  const { matchGroups } = document.rules;
  if (matchGroups.some(({ id }) => id === group.id)) return { refused: 'This match group is there already.' };
  if (matchGroups.length >= 100) return { refused: 'A lay has at most 100 match groups.' };
  return {
    document: { ...document, rules: { ...document.rules, matchGroups: [...matchGroups, group] } },
    said: `${group.points.length} ${group.points.length === 1 ? 'point' : 'points'} must match now.`
  };
}

export function removeMatchGroup(document: LayDocument, id: string): Edit {
  const matchGroups = document.rules.matchGroups.filter((group) => group.id !== id);
  if (matchGroups.length === document.rules.matchGroups.length)
    return { refused: 'This match group is gone already.' };
  return {
    document: { ...document, rules: { ...document.rules, matchGroups } },
    said: 'The match group is taken off.'
  };
}

/** The repeat of the cloth as it lies on the table, and how far off a match may be. */
export function setRepeat(document: LayDocument, repeat: Strip['repeat'], tolerance: Millimetres): Edit {
  return {
    document: {
      ...document,
      strip: { ...document.strip, repeat },
      rules: { ...document.rules, matchTolerance: tolerance }
    },
    said: repeat.along || repeat.across ? 'The repeat is set anew.' : 'The cloth has no repeat.'
  };
}

/** Allows or forbids a panel to lie over flaws. */
export function allowOverFlaws(
  document: LayDocument,
  panel: { readonly styleVersion: string; readonly panel: string },
  allowed: boolean
): Edit {
  const others = document.rules.mayCoverFlaws.filter(
    (one) => one.styleVersion !== panel.styleVersion || one.panel !== panel.panel
  );
  return {
    document: {
      ...document,
      rules: { ...document.rules, mayCoverFlaws: allowed ? [...others, panel] : others }
    },
    said: allowed ? 'This panel may lie over a flaw.' : 'This panel may not lie over a flaw.'
  };
}
