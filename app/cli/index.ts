import { main } from './main.ts'

const interrupted = new AbortController()
// Once: a second Ctrl-C ends the process whatever it does.
process.once('SIGINT', () => interrupted.abort())
// Whoever reads the output may stop early, as `head` does.
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code !== 'EPIPE') throw error
  process.exit(0)
})

process.exitCode = await main(process.argv.slice(2), {
  entryUrl: import.meta.url,
  stdin: process.stdin,
  stdout: process.stdout,
  stderr: process.stderr,
  env: process.env,
  signal: interrupted.signal,
  isInterrupted: () => interrupted.signal.aborted,
})
