import type { Meaning } from './reading';

/** Names that drawing programs hand out by themselves and that tell a person nothing. */
const GENERIC =
  /^(?:path|rect|rectangle|polygon|polyline|circle|ellipse|line|g|group|layer|use|svg|text|tspan|shape|object|element|curve|spline|sketch|image|block|_)*[-_ ]*\d*(?:[-_]\d+)*[-_]*$/i;

/** An id or label as a name for people; '' when it says nothing. */
export function nameFrom(text: string | undefined): string {
  if (text === undefined) return '';
  const plain = text
    .replace(/_x([0-9A-Fa-f]{2,5})_/g, (_, hex: string) =>
      String.fromCodePoint(Math.min(parseInt(hex, 16), 0x10ffff))
    )
    .replace(/_+/g, ' ')
    // eslint-disable-next-line no-control-regex
    .replace(/[\u0000-\u001f\u007f\s]+/g, ' ')
    .trim()
    .slice(0, 80);
  return GENERIC.test(plain) ? '' : plain;
}

/** What a name says that its line is. Names of closed outlines are mostly those of panels, so few words count there. */
export function meaningOfName(name: string, closed: boolean): Meaning {
  if (name === '') return 'plain';
  if (/\bdrill/i.test(name)) return 'drill';
  if (/\bcut[- ]?outs?\b/i.test(name)) return 'cutOut';
  if (/\b(sew|stitch(ing)?|seam)[- ]?lines?\b/i.test(name)) return 'sew';
  if (/\bcut(ting)?[- ]?lines?\b/i.test(name)) return 'boundary';
  if (closed) return /\binternal\b/i.test(name) ? 'internal' : 'plain';
  if (/grain/i.test(name)) return 'grain';
  if (/\bnotch(es)?\b/i.test(name)) return 'notch';
  if (/\b(fold|mirror)\b/i.test(name)) return 'mirror';
  if (/\b(internal|dart|pleat|tuck|pocket)\b/i.test(name)) return 'internal';
  return 'plain';
}

export interface Says {
  howMany: number | null;
  paired: boolean | null;
  onFold: boolean;
  material: string | null;
}

export const SAYS_NOTHING: Says = { howMany: null, paired: null, onFold: false, material: null };

/** What the words on a pattern say about cutting: 'cut 2', '1 pair', 'on the fold', 'lining'. Null: they say nothing. */
export function cuttingWords(text: string): Partial<Says> | null {
  const says: Partial<Says> = {};
  const pairs = /(\d+)\s*(?:x\s*)?pairs?\b/i.exec(text);
  const count =
    /\b(?:cut|qty|quantity|pieces)\s*[:=]?\s*[x×]?\s*(\d{1,2})\b/i.exec(text) ??
    /\b(\d{1,2})\s*(?:x|×|pieces?)(?:\s|$)/i.exec(text);
  if (pairs) {
    says.howMany = Number(pairs[1]) * 2;
    says.paired = true;
  } else if (count) says.howMany = Number(count[1]);
  if (/\bpair\b|\bleft\s*(?:and|&|\+|\/)\s*right\b|\bL\s*(?:&|\+|\/)\s*R\b|\bmirrored\b/i.test(text)) {
    says.paired = true;
    says.howMany ??= 2;
  }
  if (/\bfold\b/i.test(text)) says.onFold = true;
  const material = /\b(interlining|interfacing|lining|contrast|toile|self|main)\b/i.exec(text);
  if (material) says.material = material[1]!.toLowerCase();
  if (says.howMany != null && (says.howMany < 1 || says.howMany > 200)) delete says.howMany;
  return Object.keys(says).length > 0 ? says : null;
}
