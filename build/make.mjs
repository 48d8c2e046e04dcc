// `npm run build`: all bundles into dist/, made anew where their sources changed.
import { setUp } from './setup.mjs';

await setUp(['node', 'preload', 'renderer']);
process.stderr.write('dist/ is up to date.\n');
