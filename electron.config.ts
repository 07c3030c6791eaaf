import { defineConfig } from 'electron-vite'

/** Electron's main process and its one sandboxed preload file; the renderer is built by vite.renderer.config.ts. */
export default defineConfig({
  main: {
    build: {
      outDir: 'out/main',
      externalizeDeps: { exclude: ['zod'] },
      rolldownOptions: { input: 'app/main/index.ts', output: { format: 'es', entryFileNames: 'index.js' } },
    },
  },
  preload: {
    build: {
      outDir: 'out/preload',
      externalizeDeps: false,
      rolldownOptions: {
        input: 'app/preload/index.ts',
        output: { format: 'cjs', entryFileNames: 'index.cjs' },
      },
    },
  },
})
