// Child processes of the build scripts: quiet while all is well, everything shown when something fails.
import { spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { stripVTControlCharacters } from 'node:util';

/** Root of the checkout. */
export const ROOT = join(dirname(fileURLToPath(import.meta.url)), '..');

export const inRoot = (...parts) => join(ROOT, ...parts);

/**
 * Runs a program and waits for it.
 * @param {string} command
 * @param {string[]} args
 * @param {{ quiet?: boolean, cwd?: string, env?: Record<string, string> }} [options] quiet: collect the output
 *   instead of showing it.
 * @returns {Promise<{ code: number, output: string }>} code 130 where a signal ended the program.
 */
export function run(command, args, { quiet = false, cwd = ROOT, env = {} } = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, {
      cwd,
      env: { ...process.env, ...env },
      stdio: quiet ? ['ignore', 'pipe', 'pipe'] : 'inherit',
    });
    const chunks = [];
    child.stdout?.on('data', (chunk) => chunks.push(chunk));
    child.stderr?.on('data', (chunk) => chunks.push(chunk));
    child.on('error', reject);
    child.on('close', (code) => {
      // Colours are dropped: some tools give them whether or not anyone can see them.
      const output = stripVTControlCharacters(Buffer.concat(chunks).toString());
      resolve({ code: code ?? 130, output });
    });
  });
}

/** Runs one of our Node scripts or an installed package's command under this Node. */
export const runNode = (script, args, options) => run(process.execPath, [script, ...args], options);

/** Path of the JavaScript file behind an installed package's command: works alike on every system. */
export function packageCommand(name, command = name) {
  const manifest = inRoot('node_modules', name, 'package.json');
  if (!existsSync(manifest)) throw new Error(`${name} is not installed: run \`npm ci\``);
  const { bin } = createRequire(import.meta.url)(manifest);
  return join(dirname(manifest), typeof bin === 'string' ? bin : bin[command]);
}
