import type { OpenedFiles } from '../shell';

/** What the shell's server says about a group of files; `href` is relative to the page. */
export interface Listing {
  readonly name: string;
  readonly chosenOneByOne: boolean;
  /** The page should show the demo by itself. */
  readonly demo?: boolean;
  readonly files: readonly { readonly path: string; readonly href: string }[];
}

/** Fetches every file of a listing as a blob; large ones stay on the browser's side of the border. */
export async function fetchListed(listing: Listing): Promise<OpenedFiles> {
  const files = await Promise.all(
    listing.files.map(async ({ path, href }) => ({ path, blob: await (await fetchOk(href)).blob() })),
  );
  const { name, chosenOneByOne } = listing;
  return { name, files, chosenOneByOne };
}

export async function fetchListing(href: string): Promise<Listing> {
  return (await fetchOk(href)).json() as Promise<Listing>;
}

async function fetchOk(href: string): Promise<Response> {
  const response = await fetch(href);
  if (!response.ok) throw new Error(`${href} was not delivered (status ${response.status})`);
  return response;
}
