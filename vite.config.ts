import { fileURLToPath } from 'node:url';
import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vite';

/** Where the interface runs while the client is developed with `npx vite`. */
const API = process.env.TENDERLIGHT_API ?? 'http://127.0.0.1:5180';

export default defineConfig({
  root: fileURLToPath(new URL('./client', import.meta.url)),
  plugins: [react(), tailwindcss()],
  resolve: { conditions: ['tl-source', 'module', 'browser', 'development|production'] },
  // The folder client/api has the same first name as the interface; its modules are the client's own.
  server: { proxy: { '^/api/(?![\\w-]+\\.ts)': API, '/webhooks': API } },
  build: {
    outDir: fileURLToPath(new URL('./dist/client', import.meta.url)),
    emptyOutDir: true,
    sourcemap: true,
    // The content policy allows no data: fonts or scripts, so nothing is inlined.
    assetsInlineLimit: 0,
  },
});
