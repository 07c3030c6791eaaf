import { runYosys } from '@yowasp/yosys'

/**
 * Runs a script of Yosys on files and returns the files that it left. Yosys is a general-purpose open-source program for
 * synthesis, an independent reader of Verilog and Liberty. Starting it takes about a second.
 */
export async function yosys(
  script: string,
  files: Record<string, string>,
): Promise<(name: string) => string> {
  const result = await runYosys(
    ['-q', 'script.ys'],
    { ...files, 'script.ys': script },
    { stdout: null, stderr: null },
  )
  return (name) => {
    const file = result?.[name]
    if (file === undefined || (typeof file === 'object' && !(file instanceof Uint8Array))) {
      throw new Error(`the script left no file ${name}`)
    }
    return typeof file === 'string' ? file : new TextDecoder().decode(file)
  }
}
