import vue from '@vitejs/plugin-vue';
import vuetify from 'vite-plugin-vuetify';
import { defineConfig } from 'vitest/config';

/** Tests that need a database get one from these; see tests/support/database.ts. */
const onDatabase = {
  globalSetup: ['tests/support/template.ts'],
  hookTimeout: 60_000,
};

export default defineConfig({
  plugins: [vue(), vuetify({ autoImport: true })],
  build: {
    outDir: 'dist/client',
    emptyOutDir: true,
    // Fonts and pictures stay files: the content security policy allows no data: addresses for scripts and styles.
    assetsInlineLimit: 0,
    modulePreload: { polyfill: false },
    sourcemap: true,
  },
  server: {
    host: '127.0.0.1',
    strictPort: true,
    proxy: { '/api': process.env.API_ADDRESS ?? 'http://127.0.0.1:3001' },
  },
  test: {
    maxWorkers: 2,
    // Property tests run thousands of cases; a slow machine is no fault of theirs.
    testTimeout: 30_000,
    coverage: {
      include: ['shared/**/*.ts', 'server/**/*.ts', 'src/**/*.{ts,vue}'],
      reporter: ['text-summary', 'html'],
    },
    projects: [
      {
        extends: true,
        test: { name: 'unit', include: ['tests/unit/**/*.test.ts'], exclude: ['tests/unit/src/**'] },
      },
      {
        extends: true,
        test: {
          name: 'unit-client',
          include: ['tests/unit/src/**/*.test.ts'],
          environment: 'happy-dom',
          server: { deps: { inline: ['vuetify'] } },
        },
      },
      { extends: true, test: { name: 'api', include: ['tests/api/**/*.test.ts'], ...onDatabase } },
      { extends: true, test: { name: 'reference', include: ['tests/reference/**/*.test.ts'], ...onDatabase } },
      { extends: true, test: { name: 'faults', include: ['tests/faults/**/*.test.ts'], ...onDatabase } },
    ],
  },
});
