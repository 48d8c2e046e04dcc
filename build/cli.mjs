// `npm run -s spinwright -- ARGS`: builds what the command line needs, silently, then becomes it.
import { pathToFileURL } from 'node:url';
import { inRoot } from './process.mjs';
import { setUp } from './setup.mjs';

await setUp(['node']);
await import(pathToFileURL(inRoot('dist/node/cli.js')).href);
