/**
 * The address of the same list with some parameters changed; null or '' takes one away. Any other change than the page
 * goes back to the first page.
 */
export function withParams(url: URL, changes: Readonly<Record<string, string | number | null>>): string {
  const params = new URLSearchParams(url.search);
  if (!('page' in changes)) params.delete('page');
  for (const [key, value] of Object.entries(changes))
    if (value === null || value === '') params.delete(key);
    else params.set(key, String(value));
  const text = params.toString();
  return text ? `?${text}` : url.pathname;
}
