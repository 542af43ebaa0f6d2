import { panelSchema, type Panel } from './panel';
import { panelFindings } from './panel-check';

/** What an operation of the panel desk gives: what it made, or why it can't be, in words. */
export type Edited<T = Panel> =
  | { readonly made: T; readonly refused?: undefined }
  | { readonly made?: undefined; readonly refused: string };

export const refused = (why: string): { readonly refused: string } => ({ refused: why });

/**
 * The panel `made`, through the schema and the check of panels; refused with the first thing that would stop it. A fault that `before`
 * had already does not refuse: a broken panel is mended step by step.
 */
export function accepted(made: Panel, before?: Panel): Edited {
  const read = panelSchema.safeParse(made);
  if (!read.success) return refused(read.error.issues[0]!.message);
  const stops = panelFindings(read.data).filter(({ severity }) => severity === 'stops');
  if (stops.length === 0) return { made: read.data };
  const had = before && new Set(panelFindings(before).map(({ kind }) => kind));
  const fresh = stops.find(({ kind }) => !had?.has(kind));
  return fresh ? refused(fresh.message) : { made: read.data };
}

/** An id that is not among `taken`: the wish itself, or the wish and a number. */
export function freeId(wish: string, taken: Iterable<string>): string {
  const all = new Set(taken);
  const short = wish.slice(0, 58);
  if (!all.has(short)) return short;
  for (let n = 2; ; n++) if (!all.has(`${short}-${n}`)) return `${short}-${n}`;
}
