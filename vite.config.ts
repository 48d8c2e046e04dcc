import { readdirSync, readFileSync } from 'node:fs';
import { svelte } from '@sveltejs/vite-plugin-svelte';
import { defineConfig, type Plugin } from 'vite';

const DEMO = new URL('app/demo/carbonyl/', import.meta.url);

/** The demo's integrals and their listing as assets of the window, so that every shell serves them alike. */
function demo(): Plugin {
  return {
    name: 'demo',
    apply: 'build',
    generateBundle() {
      const names = readdirSync(DEMO).sort();
      for (const name of names)
        this.emitFile({ type: 'asset', fileName: `demo/${name}`, source: readFileSync(new URL(name, DEMO)) });
      const files = names
        .filter((name) => name !== 'PROVENANCE')
        .map((path) => ({ path, href: `demo/${encodeURIComponent(path)}` }));
      const source = JSON.stringify({ name: 'carbonyl', chosenOneByOne: false, files });
      this.emitFile({ type: 'asset', fileName: 'demo/listing.json', source });
    },
  };
}

// The window: static files with relative URLs, the same for the desktop shell and the browser shell.
export default defineConfig({
  root: 'renderer',
  base: './',
  plugins: [svelte(), demo()],
  build: {
    outDir: '../dist/renderer',
    emptyOutDir: true,
    target: 'chrome120',
    assetsInlineLimit: 0, // no data: URLs, so that the content security policy can stay strict
    modulePreload: { polyfill: false },
    chunkSizeWarningLimit: 6000,
  },
  worker: { format: 'es' },
});
