// Compiles core/linalg/kernels/kernels.asm.ts to WebAssembly and writes it, as base64, to wasm-bytes.ts beside it.
// The core stays free of file access that way: one bundle carries its kernels. Skipped where sources and compiler
// are those of the last time (their digest is kept in the output).
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const folder = join(root, 'core/linalg/kernels');
const output = join(folder, 'wasm-bytes.ts');
const ENTRY = 'kernels.asm.ts';
// No relaxed SIMD: it would let the rounding depend on the machine.
const FLAGS = ['-O3', '--converge', '--noAssert', '--runtime', 'stub', '--enable', 'simd'];

const sources = readdirSync(folder)
  .filter((name) => name.endsWith('.asm.ts'))
  .sort();
const hash = createHash('sha256').update(FLAGS.join(' '));
for (const name of [...sources.map((source) => join(folder, source)), fileURLToPath(import.meta.url)]) {
  hash.update(readFileSync(name));
}
hash.update(readFileSync(join(root, 'node_modules/assemblyscript/package.json')));
const mark = `// sources ${hash.digest('hex')}`;

if (!existsSync(output) || !readFileSync(output, 'utf8').startsWith(mark)) {
  const wasm = await compile();
  const fresh = `${output}.${process.pid}`;
  writeFileSync(
    fresh,
    `${mark}\n// Made by build/kernels.mjs; do not edit.\nexport default '${Buffer.from(wasm).toString('base64')}';\n`,
  );
  renameSync(fresh, output); // other processes see the old file or the new one, never half of it
}

async function compile() {
  const { default: asc } = await import('assemblyscript/asc'); // takes its time, so only when needed
  let binary;
  const { error, stderr } = await asc.main([ENTRY, '--outFile', 'kernels.wasm', ...FLAGS], {
    readFile: (name, base) => {
      const path = join(base, name);
      const own = join(folder, name);
      if (existsSync(own)) return readFileSync(own, 'utf8');
      return existsSync(path) ? readFileSync(path, 'utf8') : null;
    },
    writeFile: (_name, contents) => {
      binary = contents;
    },
    listFiles: () => [],
  });
  if (error) {
    process.stderr.write(
      `${stderr.toString()}\nbuild/kernels.mjs: the kernels do not compile: ${error.message}\n`,
    );
    process.exit(1);
  }
  return binary;
}
