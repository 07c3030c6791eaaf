import { main } from './main.ts'

process.exitCode = await main(process.argv.slice(2), {
  entryUrl: import.meta.url,
  stdout: process.stdout,
  stderr: process.stderr,
  env: process.env,
})
