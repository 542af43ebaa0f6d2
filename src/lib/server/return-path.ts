/**
 * A path of this site to go on to, from what a link or a form brought along; `fallback` for anything else: another
 * site, a path that a browser would read as one, the doors themselves.
 */
export function returnPath(given: string | null | undefined, fallback = '/'): string {
  if (!given?.startsWith('/') || /^\/\/|[\p{Cc}\\]/u.test(given)) return fallback;
  const here = 'http://here.invalid';
  const url = URL.canParse(given, here) ? new URL(given, here) : null;
  if (!url || url.origin !== here || url.pathname.startsWith('//')) return fallback;
  if (/^\/(sign-in|sign-out|sign-up|forgotten)(\/|$)/.test(url.pathname)) return fallback;
  return url.pathname + url.search;
}
