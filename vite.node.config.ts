import { readdirSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vite'

const threads = readdirSync(new URL('./app/workers', import.meta.url)).filter((name) =>
  /-(worker|helper)\.ts$/.test(name),
)

/** The command line, the loopback host and the scripts of the worker threads, one bundle each, for Node. */
export default defineConfig({
  root: fileURLToPath(new URL('.', import.meta.url)),
  publicDir: false,
  build: {
    ssr: true,
    target: 'node24',
    outDir: 'out/node',
    emptyOutDir: true,
    minify: false,
    rolldownOptions: {
      input: {
        cli: 'app/cli/index.ts',
        ...Object.fromEntries(threads.map((name) => [name.replace(/\.ts$/, ''), `app/workers/${name}`])),
      },
      output: { entryFileNames: '[name].js', chunkFileNames: 'chunks/[name]-[hash].js', format: 'es' },
    },
  },
  ssr: {
    noExternal: true,
    external: ['better-sqlite3', 'highs', 'pdfmake', 'write-excel-file'],
  },
})
