const browsers: readonly (readonly [RegExp, string])[] = [
  [/Edg\//, 'Edge'],
  [/Firefox\//, 'Firefox'],
  [/Chrome\/|CriOS\//, 'Chrome or a relative of it'],
  [/Safari\//, 'Safari']
];
const machines: readonly (readonly [RegExp, string])[] = [
  [/iPad|iPhone/, 'an iPad or iPhone'],
  [/Android/, 'an Android device'],
  [/Windows/, 'a Windows computer'],
  [/Macintosh/, 'a Mac'],
  [/Linux|X11/, 'a Linux computer']
];

/** What a browser says of itself, in words by which its owner knows it again. */
export function browserWords(userAgent: string): string {
  const found = (list: typeof browsers) => list.find(([sign]) => sign.test(userAgent))?.[1];
  const browser = found(browsers);
  const machine = found(machines);
  if (!browser && !machine) return userAgent.slice(0, 60) || 'An unnamed browser';
  return `${browser ?? 'A browser'}${machine ? ` on ${machine}` : ''}`;
}
