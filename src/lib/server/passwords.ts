import { hash, verify } from '@node-rs/argon2';
import { commonWords, walks } from './common-passwords';

/** argon2id, 19 MiB, two passes, one lane: OWASP's password storage recommendation. */
const parameters = { algorithm: 2, memoryCost: 19_456, timeCost: 2, parallelism: 1, outputLen: 32 } as const;

export const shortest = 12;
/** Long enough for any phrase; a bound, so that nobody has megabytes hashed. */
export const longest = 256;

/** NFKC, so that the same phrase typed on another keyboard is the same password. */
const normal = (password: string): string => password.normalize('NFKC');

/** The hash to store. */
export async function hashPassword(password: string): Promise<string> {
  return hash(normal(password), parameters);
}

let nobodysHash: Promise<string> | undefined;

/**
 * Whether the password fits the stored hash. Without a hash (nobody has that address) as much work is done, so that
 * the time of the answer says nothing.
 */
export async function fitsHash(stored: string | null, password: string): Promise<boolean> {
  const compared = stored ?? (await (nobodysHash ??= hashPassword('nobody has this password')));
  const fits = await verify(compared, normal(password).slice(0, longest));
  return stored !== null && fits;
}

const look: Readonly<Record<string, string>> = {
  '0': 'o',
  '1': 'i',
  '3': 'e',
  '4': 'a',
  '5': 's',
  '7': 't',
  '@': 'a',
  $: 's',
  '!': 'i',
  '|': 'l'
};

/** Lower case without marks and signs; with `undisguise`, figures and signs that stand for letters become letters. */
function bare(text: string, undisguise: boolean): string {
  const folded = normal(text).normalize('NFD').replace(/\p{M}/gu, '').toLowerCase();
  const letters = undisguise ? folded.replace(/[0134577@$!|]/g, (sign) => look[sign] ?? sign) : folded;
  return letters.replace(/[^\p{L}\p{N}]/gu, '');
}

/** What is left of a password when known words, walks over the keyboard and figures are taken out. */
function remainder(text: string, words: readonly string[]): { left: string; used: number } {
  let left = text;
  let used = 0;
  for (const word of words)
    if (left.includes(word)) {
      used += 1;
      left = left.replaceAll(word, '');
    }
  for (const walk of walks) left = left.replaceAll(walk, '');
  return { left: left.replace(/\p{N}/gu, ''), used };
}

/** Whether the whole text is one short piece over and over: 'abcabcabcabc'. */
const repeats = (text: string): boolean => /^(.{1,5}?)\1+.{0,4}$/su.test(text);

/** Whether each sign follows the one before in the alphabet or among the figures, up or down. */
function runs(text: string): boolean {
  const codes = [...text].map((sign) => sign.codePointAt(0)!);
  const steps = codes.slice(1).map((code, i) => code - codes[i]!);
  const monotone = steps.filter((step) => Math.abs(step) <= 1).length;
  return monotone >= steps.length * 0.75;
}

/**
 * Why a password can't be used, as a sentence; null when it can. `about`: the person's name and address, the studio's
 * name: a password made of those is refused too. Any characters are welcome, and there is no rule about mixing them.
 */
export function passwordFault(password: string, about: readonly string[] = []): string | null {
  const length = [...normal(password)].length;
  if (length < shortest) return `At least ${shortest} characters, please. A few words in a row do well.`;
  if (length > longest) return `At most ${longest} characters, please.`;
  const personal = about
    .flatMap((text) => [bare(text, false), ...text.split(/[^\p{L}\p{N}]+/u).map((part) => bare(part, false))])
    .filter((part) => part.length >= 3);
  const words = [...personal, ...commonWords].sort((a, b) => b.length - a.length);
  for (const undisguise of [false, true]) {
    const text = bare(password, undisguise);
    if (new Set(text).size < 5 || repeats(text) || runs(text)) return tooCommon;
    // Three different words or more are a phrase; one or two with figures are the first thing that is tried.
    const { left, used } = remainder(text, words);
    if (left.length < 4 && used <= 2) return tooCommon;
  }
  return null;
}

const tooCommon =
  'This password is one of the first that would be tried. Take a few words that have nothing to do with each other.';
