import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';

function withoutDisplay(script: string, ...args: string[]) {
  const { DISPLAY: _x, WAYLAND_DISPLAY: _wayland, ...env } = process.env;
  return spawnSync(process.execPath, [script, ...args], { encoding: 'utf8', env, input: '' });
}

describe.skipIf(process.platform !== 'linux')('npm start without a display', () => {
  it('says why and prints the whole comparison of the demo', async () => {
    await ensureKernels();
    await ensureBuilt(['node']);
    const { status, stdout, stderr } = withoutDisplay('build/start.mjs');
    expect(stderr).toMatch(
      /^Opening in the terminal: there is no display .+ run `npm start` in a desktop session\.$/m,
    );
    expect(stdout).toMatch(/^Toffoli a step .+ −\d+\.\d % /m);
    expect(stdout).toMatch(/^Recommended: /m);
    expect(status).toBe(0);
  });

  it('has in `npm run spinwright` the bundled command line itself', () => {
    const sizes = '--method sparse --spin-orbitals 8 --lambda 3 --coefficients 50 --target 1mEh --json';
    const args = ['whatif', ...sizes.split(' ')];
    const { status, stdout, stderr } = withoutDisplay('build/cli.mjs', ...args);
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toBe(withoutDisplay('dist/node/cli.js', ...args).stdout);
  });
});
