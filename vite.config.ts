import { svelte } from '@sveltejs/vite-plugin-svelte';
import { defineConfig } from 'vite';

// The window: static files with relative URLs, the same for the desktop shell and the browser shell.
export default defineConfig({
  root: 'renderer',
  base: './',
  plugins: [svelte()],
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
