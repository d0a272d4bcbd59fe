// The import rules between the rooms of src/, for values and types alike. Exceptions are part of a rule or do not exist.

// From the first to the last: a file imports from its own room and from rooms before it.
const rooms = [
  'core/',
  'spec/',
  'array/',
  'linearity/',
  'placement/',
  'hookup/',
  'geometry/',
  'extraction/',
  'check/',
  'sizing/',
  'simulation/',
  'comparison/',
  'export/',
  'pipeline.ts',
  'index.ts',
  'page/',
  'cli/',
];
const inRoom = (room) => (room.endsWith('/') ? `^src/${room}` : `^src/${room.replace('.', '\\.')}$`);
const anyOf = (names) => names.map(inRoom).join('|');

const order = rooms.slice(0, -1).map((room, position) => ({
  name: `order-${room.replace(/\W.*/, '')}`,
  comment: `${room} stands before the room that it imports`,
  from: { path: inRoom(room) },
  to: { path: anyOf(rooms.slice(position + 1)) },
}));

const lazyPackages = 'node_modules/(@types/)?(paper|jsdom|highs)/';

/** @type {import('dependency-cruiser').IConfiguration} */
export default {
  forbidden: [
    ...order.map((rule) => ({ ...rule, severity: 'error' })),
    {
      name: 'no-cycle',
      severity: 'error',
      comment: 'types count too',
      from: {},
      to: { circular: true },
    },
    {
      name: 'known-room',
      severity: 'error',
      comment: 'every file that imports something lives in a room of the list above',
      from: { path: '^src/', pathNot: anyOf(rooms) },
      to: {},
    },
    {
      name: 'known-room-orphan',
      severity: 'error',
      comment: 'every file that imports nothing and is imported by nobody lives in a room of the list above',
      from: { orphan: true, path: '^src/', pathNot: anyOf(rooms) },
      to: {},
    },
    {
      name: 'to-known-room',
      severity: 'error',
      comment: 'nothing is imported from outside src/ but packages, nor from a file that is in no room',
      from: { path: '^src/' },
      to: { pathNot: `${anyOf(rooms)}|node_modules/`, dependencyTypesNot: ['core'], couldNotResolve: false },
    },
    {
      name: 'check-leans-on-core',
      severity: 'error',
      comment: 'the checker takes values from core/ alone, so that it cannot share the arithmetic that it checks',
      from: { path: inRoom('check/') },
      to: { path: '^src/', pathNot: anyOf(['core/', 'spec/', 'check/']) },
    },
    {
      name: 'check-takes-types-from-spec',
      severity: 'error',
      comment: 'from spec/ the checker takes types, never values',
      from: { path: inRoom('check/') },
      to: { path: inRoom('spec/'), dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'page-stops-at-comparison',
      severity: 'error',
      comment: 'the page script computes with core/ to comparison/ and pipeline.ts',
      from: { path: inRoom('page/') },
      to: { path: anyOf(['export/', 'index.ts']) },
    },
    {
      name: 'nobody-imports-page',
      severity: 'error',
      from: { pathNot: inRoom('page/') },
      to: { path: inRoom('page/') },
    },
    {
      name: 'nobody-imports-cli',
      severity: 'error',
      from: { pathNot: inRoom('cli/') },
      to: { path: inRoom('cli/') },
    },
    {
      name: 'cli-uses-the-public-api',
      severity: 'error',
      comment: 'the command line can do what any other user of the library can',
      from: { path: inRoom('cli/') },
      to: { path: '^src/', pathNot: anyOf(['cli/', 'index.ts']) },
    },
    {
      name: 'no-node-outside-cli',
      severity: 'error',
      comment: 'all but cli/ runs in a browser as it is',
      from: { path: '^src/', pathNot: inRoom('cli/') },
      to: { dependencyTypes: ['core'] },
    },
    {
      name: 'heavy-packages-lazily',
      severity: 'error',
      comment: 'paper, jsdom and highs are loaded where and when they are used; their types cost nothing',
      from: { path: '^src/' },
      to: { path: lazyPackages, dynamic: false, dependencyTypesNot: ['type-only'] },
    },
    {
      name: 'installed-packages',
      severity: 'error',
      comment: 'a package that users get is a dependency, not a tool of ours or a guest of another package',
      from: { path: '^src/' },
      to: {
        dependencyTypes: ['npm-dev', 'npm-no-pkg', 'npm-unknown', 'npm-peer', 'npm-optional'],
        dependencyTypesNot: ['type-only', 'npm'],
      },
    },
    {
      name: 'resolvable',
      severity: 'error',
      from: {},
      to: { couldNotResolve: true },
    },
  ],
  options: {
    tsPreCompilationDeps: 'specify',
    tsConfig: { fileName: 'tsconfig.json' },
    doNotFollow: { path: 'node_modules' },
    enhancedResolveOptions: { exportsFields: ['exports'], conditionNames: ['import', 'types', 'node', 'default'] },
  },
};
