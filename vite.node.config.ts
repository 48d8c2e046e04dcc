import { builtinModules } from 'node:module';
import { defineConfig } from 'vite';

// Everything that runs under Node: the command line with its worker, the loopback shell and the desktop's
// main process. One build, so that they share the bundled core.
export default defineConfig({
  build: {
    ssr: true,
    outDir: 'dist/node',
    emptyOutDir: true,
    target: 'node20',
    minify: false,
    rolldownOptions: {
      input: {
        cli: 'app/cli/main.ts',
        worker: 'app/cli/worker.ts',
        shell: 'app/web/main.ts',
        desktop: 'app/desktop/main.ts',
      },
      output: { format: 'es', entryFileNames: '[name].js', chunkFileNames: 'chunks/[name]-[hash].js' },
      external: ['electron', ...builtinModules, ...builtinModules.map((m) => `node:${m}`)],
    },
  },
  ssr: { noExternal: true, external: ['electron'] },
});
