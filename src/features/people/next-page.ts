/** Where to go after signing in: a page of this site, or the first page if anything else is asked for. */
export function nextPage(asked: string | null): string {
  if (!asked?.startsWith('/')) return '/';
  // Browsers read "\" as "/", and "//" or "/\" at the start as the address of another site.
  const url = new URL(asked, 'https://this-site.invalid');
  return url.host === 'this-site.invalid' ? `${url.pathname}${url.search}${url.hash}` : '/';
}
