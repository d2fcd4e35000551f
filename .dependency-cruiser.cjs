// The one-way rule: a folder may import itself and the folders listed for it.
const LAYERS = {
  tracking: [],
  lib: ['tracking'],
  stacks: ['tracking', 'lib'],
  models: ['tracking', 'lib'],
  jobs: ['tracking', 'lib', 'stacks', 'models'],
  auth: ['lib', 'models'],
  components: ['tracking', 'lib'],
  app: ['tracking', 'lib', 'stacks', 'models', 'jobs', 'auth', 'components'],
};
const all = [...Object.keys(LAYERS), 'tests', 'scripts', 'migrations'];
const rule = (name, from, to) => ({ name, severity: 'error', from, to });
const forbiddenFor = (folder, may) =>
  `^(${all.filter((other) => other !== folder && !may.includes(other)).join('|')})/`;

module.exports = {
  forbidden: [
    ...Object.entries(LAYERS).map(([folder, may]) =>
      rule(`${folder}-layer`, { path: `^${folder}/` }, { path: forbiddenFor(folder, may) }),
    ),
    // The kernels compute and nothing else; the two packages named are pure computation.
    rule(
      'tracking-is-pure',
      { path: '^tracking/' },
      {
        dependencyTypes: ['core', 'npm', 'npm-dev', 'npm-optional', 'npm-peer', 'npm-no-pkg', 'unknown'],
        pathNot: '(^|node_modules/)(ml-|kd-tree-javascript)',
      },
    ),
    rule(
      'browser-never-reaches-server',
      { path: '^components/' },
      { path: '^(models|jobs|auth|stacks)/|^lib/env\\.ts$', reachable: true },
    ),
    rule(
      'web-enqueues-worker-runs',
      { path: '^(app|auth)/' },
      { path: '^jobs/(.*\\.handler|registry|worker)\\.ts$', reachable: true },
    ),
    rule('no-cycles', {}, { circular: true }),
  ],
  options: {
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '\\.next/' },
  },
};
