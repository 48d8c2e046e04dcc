import { makePages, type PagesOptions } from '../web/pages';
import { SAFE_HEADERS } from '../web/policy';

/** Pages of file: addresses have no origin of their own, so the window gets a scheme. */
export const SCHEME = 'spinwright';
export const ORIGIN = `${SCHEME}://window/`;

/** True for the window's own pages only. */
export function isOwnPage(url: string): boolean {
  return url.startsWith(ORIGIN);
}

/** Answers requests of the window's scheme through the same pages that the loopback server serves. */
export function makeSchemeHandler(
  options: PagesOptions,
): (request: { readonly url: string; readonly method: string }) => Promise<Response> {
  const pages = makePages(options);
  return async ({ url, method }) => {
    if (!isOwnPage(url) || method !== 'GET')
      return new Response(null, { status: 405, headers: SAFE_HEADERS });
    // Not new URL().pathname alone: it would resolve "..", and a request that tries to leave should be refused as such.
    return pages(url.slice(ORIGIN.length).split(/[?#]/)[0]!);
  };
}
