import { fileURLToPath } from 'node:url';
import vue from '@vitejs/plugin-vue';
import { defaultClientConditions, defineConfig } from 'vite';

/** The client. In development the API is proxied, so that cookies behave as they do when the server serves the build. */
export default defineConfig({
  root: fileURLToPath(new URL('.', import.meta.url)),
  plugins: [vue()],
  resolve: { conditions: ['source', ...defaultClientConditions] },
  worker: { format: 'es' },
  build: { target: 'es2023', sourcemap: false, chunkSizeWarningLimit: 600 },
  server: { proxy: { '/api': process.env.API_ADDRESS ?? 'http://127.0.0.1:8080' } },
  preview: { proxy: { '/api': process.env.API_ADDRESS ?? 'http://127.0.0.1:8080' } },
});
