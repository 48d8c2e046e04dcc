import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';

const lint = (tree: string) =>
  spawnSync(process.execPath, ['build/lint.mjs', '--root', `test/fixtures/arrows/${tree}`], {
    encoding: 'utf8',
  });

describe('the dependency law in lint', () => {
  it('fails on an import that points upward and names the rule', () => {
    const { status, stdout } = lint('upward');
    expect(status).toBe(1);
    expect(stdout).toContain('core-linalg-imports-upward');
    expect(stdout).toContain('core/linalg/index.ts');
  });

  it('passes the same tree with the arrow turned round', () => {
    const { status, stdout } = lint('downward');
    expect(stdout).toContain('ok     lint: dependency law');
    expect(status).toBe(0);
  });
});
