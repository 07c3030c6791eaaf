import vue from '@vitejs/plugin-vue'
import { defineConfig } from 'vitest/config'

const node = (name: string, include: string[], testTimeout = 20_000) => ({
  extends: true as const,
  test: { name, include: include.map((pattern) => `test/${pattern}`), environment: 'node', testTimeout },
})

const e2e = node('e2e', ['e2e/**/*.test.ts'], 180_000)

export default defineConfig({
  root: new URL('..', import.meta.url).pathname,
  plugins: [vue()],
  test: {
    pool: 'forks',
    maxWorkers: 2,
    reporters: process.env['CI'] ? [['default', { summary: false }], 'json'] : ['default'],
    outputFile: { json: 'out/test-results.json' },
    projects: [
      node('engine', ['engine/**/*.test.ts', 'contract/**/*.test.ts', 'report/**/*.test.ts']),
      node('db', ['db/**/*.test.ts']),
      node('services', ['services/**/*.test.ts', 'workers/**/*.test.ts'], 60_000),
      node('cli', ['cli/**/*.test.ts', 'web/**/*.test.ts', 'launch/**/*.test.ts'], 60_000),
      node('property', ['property/**/*.test.ts', 'fuzz/**/*.test.ts'], 120_000),
      node('reference', ['reference/**/*.test.ts'], 180_000),
      node('golden', ['golden/**/*.test.ts']),
      node('architecture', ['*.test.ts'], 60_000),
      {
        extends: true,
        test: { name: 'renderer', include: ['test/renderer/**/*.test.ts'], environment: 'happy-dom' },
      },
      // By itself, after all others: it looks at how quickly the window answers.
      {
        ...e2e,
        test: {
          ...e2e.test,
          maxWorkers: 1,
          sequence: { groupOrder: 1 },
          expect: { poll: { timeout: 5000 } },
        },
      },
    ],
  },
})
