// The dependency law: for each folder, the folders it may import from (itself always).
// The table is the architecture; this file turns it into rules for dependency-cruiser.
const order = [
  'units',
  'job',
  'linalg',
  'integrals',
  'hamiltonian',
  'factor',
  'encode',
  'circuit',
  'estimate',
  'verify',
  'plan',
  'report',
];
const below = (name) => order.slice(0, order.indexOf(name));

const rules = [];

// core: an arrow may only point to a folder that comes earlier in the order; units and job import nothing,
// so that every other folder may rely on them.
for (const name of order) {
  const allowed = name === 'units' || name === 'job' ? [] : below(name);
  const forbidden = order.filter((other) => other !== name && !allowed.includes(other));
  rules.push({
    name: `core-${name}-imports-upward`,
    severity: 'error',
    comment: `core/${name} may import only ${allowed.map((a) => `core/${a}`).join(', ') || 'itself'}.`,
    from: { path: `^core/${name}/` },
    to: { path: `^core/(${forbidden.join('|')})/` },
  });
}

rules.push(
  {
    name: 'core-is-pure',
    severity: 'error',
    comment:
      'core runs in browsers, workers and tests alike: no Node built-ins, no Electron, no app, no renderer.',
    from: { path: '^core/' },
    to: { path: '^(app|renderer|test|build)/|^electron$|node_modules/electron/' },
  },
  {
    name: 'core-no-node-builtins',
    severity: 'error',
    comment: 'core has no Node built-ins: bytes come in through ByteSource.',
    from: { path: '^core/' },
    to: { dependencyTypes: ['core'] },
  },
  {
    name: 'renderer-imports-core-only',
    severity: 'error',
    comment: 'The window knows core and itself; the shells reach it through renderer/shell.ts only.',
    from: { path: '^renderer/' },
    to: { path: '^(app|test|build)/' },
  },
  {
    name: 'renderer-no-node-builtins',
    severity: 'error',
    from: { path: '^renderer/' },
    to: { dependencyTypes: ['core'] },
  },
  {
    name: 'desktop-holds-no-science',
    severity: 'error',
    comment: 'The desktop shell is thin: of core it may see only units, job and the types of core/plan.',
    from: { path: '^app/desktop/' },
    to: { path: '^core/(linalg|integrals|hamiltonian|factor|encode|circuit|estimate|verify|report)/' },
  },
  {
    name: 'browser-shell-holds-no-science',
    severity: 'error',
    from: { path: '^app/web/' },
    to: { path: '^core/(?!units|job|plan)' },
  },
  {
    name: 'app-does-not-import-the-window',
    severity: 'error',
    from: { path: '^app/' },
    to: { path: '^(renderer|test|build)/' },
  },
  { name: 'no-cycles', severity: 'error', from: {}, to: { circular: true } },
  {
    name: 'resolvable',
    severity: 'error',
    from: {},
    to: { couldNotResolve: true, pathNot: 'vite|svelte|\\?|wasm-bytes' },
  },
);

module.exports = {
  forbidden: rules,
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(dist|release|coverage)/' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: require('node:path').join(__dirname, '../tsconfig.base.json') },
    enhancedResolveOptions: {
      extensions: ['.ts', '.js', '.mjs', '.cjs', '.svelte', '.json'],
      exportsFields: ['exports'],
      conditionNames: ['import', 'require', 'node', 'default', 'types'],
    },
  },
};
