import { defineConfig } from 'vite';

// A sandboxed preload must be one CommonJS file.
export default defineConfig({
  build: {
    ssr: true,
    outDir: 'dist/preload',
    emptyOutDir: true,
    target: 'node20',
    minify: false,
    rolldownOptions: {
      input: { preload: 'app/desktop/preload.ts' },
      output: { format: 'cjs', entryFileNames: '[name].cjs' },
      external: ['electron'],
    },
  },
  ssr: { noExternal: true, external: ['electron'] },
});
