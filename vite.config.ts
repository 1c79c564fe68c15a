import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vite';

export default defineConfig({
  plugins: [react(), tailwindcss()],
  build: {
    outDir: 'dist',
    emptyOutDir: true,
    target: 'es2022',
    sourcemap: false,
    // Fonts and pictures stay files: the content security policy allows no data: addresses.
    assetsInlineLimit: 0,
    // zod and its setting share a chunk, so that the setting is made before the first contract is built; see src/lib/no-eval.ts.
    rolldownOptions: {
      output: {
        codeSplitting: { groups: [{ name: 'validation', test: /node_modules[\\/]zod|src[\\/]lib[\\/]no-eval/ }] },
      },
    },
  },
});
