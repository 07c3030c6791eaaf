import vue from '@vitejs/plugin-vue'
import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vite'

/** The window's page; the same files are shown by Electron and served on loopback. */
export default defineConfig({
  root: fileURLToPath(new URL('renderer', import.meta.url)),
  base: './',
  plugins: [vue()],
  build: {
    target: 'chrome130',
    outDir: '../out/renderer',
    emptyOutDir: true,
    assetsInlineLimit: 0,
    chunkSizeWarningLimit: 1500,
  },
})
