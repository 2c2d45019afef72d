import { PAGE_HEADERS } from './pages.ts';

/** Of pages behind a secret, or with something typed in them: kept by nobody, found by no search. */
const HEADERS = { ...PAGE_HEADERS, 'cache-control': 'no-store', 'x-robots-tag': 'noindex' };

export function shown(markup: string, status = 200, headers: Readonly<Record<string, string>> = {}): Response {
  return new Response(markup, { status, headers: { ...HEADERS, 'content-type': 'text/html; charset=utf-8', ...headers } });
}

/** After something was done: the page is asked for anew, so that loading it again does nothing twice. */
export function seeOther(location: string, headers: Readonly<Record<string, string>> = {}): Response {
  return new Response(null, { status: 303, headers: { ...HEADERS, location, ...headers } });
}
