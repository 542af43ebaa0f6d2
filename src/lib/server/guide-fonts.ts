import { readFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import type { GuideFonts } from '$lib/guide/pdf';

const require = createRequire(import.meta.url);
let held: Promise<GuideFonts> | undefined;

/** The bytes of the fonts that guides are set in: the whole families, Greek and Cyrillic included. Read once. */
export function guideFonts(): Promise<GuideFonts> {
  const file = (name: string) => readFile(require.resolve(`@expo-google-fonts/ibm-plex-sans/${name}`));
  return (held ??= Promise.all([
    file('400Regular/IBMPlexSans_400Regular.ttf'),
    file('600SemiBold/IBMPlexSans_600SemiBold.ttf')
  ]).then(([regular, bold]) => ({ regular, bold })));
}
