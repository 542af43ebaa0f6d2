import type { Handle } from '@sveltejs/kit';

/** What every answer tells the browser. The content security policy of pages, frame-ancestors included, is svelte.config's. */
const always: Readonly<Record<string, string>> = {
  'x-content-type-options': 'nosniff',
  // One-time links must not leave with a click on an outside link.
  'referrer-policy': 'same-origin',
  'permissions-policy': 'camera=(), microphone=(), geolocation=(), payment=(), usb=()',
  'cross-origin-opener-policy': 'same-origin',
  'cross-origin-resource-policy': 'same-origin'
};

export const headers: Handle = async ({ event, resolve }) => {
  const response = await resolve(event);
  for (const [name, value] of Object.entries(always)) response.headers.set(name, value);
  if (event.url.protocol === 'https:')
    response.headers.set('strict-transport-security', 'max-age=31536000; includeSubDomains');
  // Answers that are not pages get a policy too: nothing in them may run, wherever they are opened.
  if (!response.headers.has('content-security-policy'))
    response.headers.set('content-security-policy', "default-src 'none'; frame-ancestors 'none'");
  if (event.locals.person.user && !response.headers.has('cache-control'))
    response.headers.set('cache-control', 'private, no-store');
  return response;
};
