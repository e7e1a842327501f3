import js from '@eslint/js';
import prettier from 'eslint-config-prettier';
import vue from 'eslint-plugin-vue';
import path from 'node:path';
import ts from 'typescript-eslint';

const root = import.meta.dirname;

/** The layers of the client, from the top; an import may only go down. */
const CLIENT = ['main', 'router', 'views', 'components', 'composables', 'stores', 'api', 'styles'];
/** The server's features in the order of the data; an import of a later feature goes through a queued job. */
const SERVER = ['accounts', 'properties', 'logs', 'ingest', 'readings', 'days', 'checks', 'reports', 'mail', 'jobs'];
const EDGE = ['main.ts', 'worker.ts', 'app.ts', 'config.ts'];

function clientLayer(file) {
  const [first] = file.split('/').slice(1);
  if (first === 'main.ts' || first === 'App.vue' || first === 'plugins') return 0;
  const at = CLIENT.indexOf(first);
  return at < 0 ? null : at;
}

/** Why `from` may not import `to` (both relative to the root), or null. */
function refusal(from, to) {
  const [a] = from.split('/');
  const [b] = to.split('/');
  if (a === 'shared' && b !== 'shared')
    return 'shared/ is pure and imports nothing of ours: pass the thing in as a parameter.';
  if (a === 'src' && b === 'server') return 'Client and server meet only over HTTP: call the API through src/api.';
  if (a === 'server' && b === 'src') return 'Client and server meet only over HTTP: move what both need to shared/.';
  if (a === 'samples' && b !== 'samples')
    return 'The simulation is an independent witness: it imports nothing of the product.';
  if (['src', 'server', 'shared'].includes(a) && ['tests', 'samples'].includes(b))
    return 'Nothing of the product imports tests or samples: move what is needed to shared/ or server/.';
  if (a === 'src' && b === 'src') {
    const up = clientLayer(from);
    const down = clientLayer(to);
    if (up !== null && down !== null && down < up)
      return `In the client imports run ${CLIENT.join(' → ')}: pass data up by props, events or a composable’s return.`;
  }
  if (a === 'server' && b === 'server') {
    const [, fromFolder] = from.split('/');
    const [, toFolder] = to.split('/');
    if (/\.routes\.ts$/.test(from) && /\.repository\.ts$/.test(to))
      return 'Routes call a service; the service calls its repository.';
    if (/\.repository\.ts$/.test(to) && fromFolder !== toFolder && SERVER.includes(fromFolder))
      return 'A feature calls another feature’s service, never its repository.';
    if (/\.(service|repository)\.ts$/.test(from) && /\.routes\.ts$/.test(to))
      return 'A service knows nothing of HTTP: throw a problem from server/http/problems.ts.';
    if (SERVER.includes(fromFolder) && EDGE.includes(toFolder) && toFolder !== 'config.ts')
      return 'main → app → routes → service → repository: pass what is needed in through deps.';
  }
  return null;
}

const direction = {
  meta: { type: 'problem', schema: [] },
  create(context) {
    const from = path.relative(root, context.filename).split(path.sep).join('/');
    const check = (node) => {
      const source = node.source?.value;
      if (typeof source !== 'string' || !source.startsWith('.')) return;
      const target = path.relative(root, path.resolve(path.dirname(context.filename), source));
      const message = refusal(from, target.split(path.sep).join('/'));
      if (message) context.report({ node, message });
    };
    return {
      ImportDeclaration: check,
      ExportNamedDeclaration: check,
      ExportAllDeclaration: check,
      ImportExpression: check,
    };
  },
};

export default ts.config(
  { ignores: ['node_modules', 'dist', '.data', 'coverage', 'screens', 'test-results'] },
  js.configs.recommended,
  ...ts.configs.recommended,
  ...vue.configs['flat/recommended'],
  {
    files: ['**/*.{ts,vue,js,mjs}'],
    plugins: { coppernoon: { rules: { direction } } },
    languageOptions: { parserOptions: { parser: ts.parser } },
    rules: {
      'coppernoon/direction': 'error',
      'no-undef': 'off',
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      '@typescript-eslint/no-explicit-any': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/consistent-type-imports': 'error',
      'vue/multi-word-component-names': 'off',
      'vue/require-default-prop': 'off',
      'vue/valid-v-slot': ['error', { allowModifiers: true }],
    },
  },
  {
    files: ['shared/**/*.ts'],
    rules: {
      'no-restricted-globals': [
        'error',
        { name: 'process', message: 'shared/ is pure: take the setting as a parameter.' },
        { name: 'window', message: 'shared/ runs on both sides: no DOM here.' },
        { name: 'document', message: 'shared/ runs on both sides: no DOM here.' },
        { name: 'Buffer', message: 'shared/ runs on both sides: use Uint8Array.' },
      ],
      'no-restricted-properties': [
        'error',
        { object: 'Date', property: 'now', message: 'shared/ has no clock: take the instant as a parameter.' },
        { object: 'Math', property: 'random', message: 'shared/ is pure: take the chance as a parameter.' },
      ],
      'no-restricted-imports': [
        'error',
        { patterns: [{ group: ['node:*', 'fs', 'path'], message: 'shared/ imports nothing of Node.' }] },
      ],
    },
  },
  {
    files: ['src/**/*.{ts,vue}'],
    rules: {
      'no-restricted-globals': [
        'error',
        { name: 'fetch', message: 'Use the typed client in src/api, which knows problem details and sign-out.' },
        { name: 'localStorage', message: 'Use useStorage from @vueuse/core in a store or composable.' },
      ],
    },
  },
  { files: ['src/api/**/*.ts'], rules: { 'no-restricted-globals': 'off' } },
  {
    files: ['server/**/*.ts'],
    rules: {
      'no-restricted-properties': [
        'error',
        { object: 'process', property: 'env', message: 'Settings are read once, in server/config.ts.' },
        { object: 'console', property: 'log', message: 'Use the logger passed in through deps (JSON, request ids).' },
      ],
    },
  },
  { files: ['server/config.ts', 'server/launch/**'], rules: { 'no-restricted-properties': 'off' } },
  prettier,
);
