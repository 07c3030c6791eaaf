import { mkdir, readFile, writeFile } from 'node:fs/promises'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import asc from 'assemblyscript/asc'

const root = join(dirname(fileURLToPath(import.meta.url)), '../..')

/** The most memory that a kernel may be given, in pages of 64 KiB: all that 32-bit addresses reach. */
const MAX_PAGES = 65536

/** Compiles the simulation kernel to out/kernel/kernel.wasm; throws with the compiler's words where it can't. */
export async function buildKernel(output = join(root, 'out/kernel/kernel.wasm')) {
  const files = new Map()
  const { error, stderr } = await asc.main(
    [
      'app/engine/simulate/assembly/index.ts',
      '--baseDir',
      root,
      '--outFile',
      'kernel.wasm',
      '-O3',
      '--converge',
      '--noAssert',
      '--runtime',
      'stub',
      '--enable',
      'simd,threads',
      '--importMemory',
      '--sharedMemory',
      '--noExportMemory',
      '--initialMemory',
      '1',
      '--maximumMemory',
      String(MAX_PAGES),
    ],
    {
      readFile: (name, baseDir) => readFile(join(baseDir, name), 'utf8').catch(() => null),
      writeFile: (name, contents) => void files.set(name, contents),
      listFiles: () => [],
    },
  )
  if (error) throw new Error(`the simulation kernel does not compile:\n${stderr.toString()}`)
  await mkdir(dirname(output), { recursive: true })
  await writeFile(output, files.get('kernel.wasm'))
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await buildKernel()
