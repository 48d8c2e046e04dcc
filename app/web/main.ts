// The loopback shell: serves the window and says where on its first line. Usage: shell.js [--empty | FILES…]
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { GrantError, Grants, NOTHING } from './grants';
import { startServer } from './server';

const root = join(import.meta.dirname, '../renderer');
const args = process.argv.slice(2);
const files = args.filter((arg) => arg !== '--empty');

try {
  if (!existsSync(join(root, 'index.html')))
    throw new GrantError('the window is not built; expected dist/renderer. Run npm run build.');
  const grants = new Grants();
  const given =
    files.length > 0 ? await grants.grant(files) : { ...NOTHING, demo: !args.includes('--empty') };
  const server = await startServer({ root, grants, given });
  process.stdout.write(`${server.url}\n`);
  for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, server.close);
  await server.closed;
} catch (error) {
  if (!(error instanceof GrantError)) throw error;
  process.stderr.write(`${error.message}\n`);
  process.exitCode = 2;
}
