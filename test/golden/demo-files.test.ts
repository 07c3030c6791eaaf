import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { demoFiles } from '../../assets/demo/generate.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { readVectors } from '../../app/engine/formats/vectors/read-vectors.ts'

describe('the demo project', () => {
  it.each([...demoFiles()])('holds %s as its generator writes it', (name, text) => {
    expect(readFileSync(new URL(`../../assets/demo/${name}`, import.meta.url), 'utf8')).toBe(text)
  })

  it.each(['fern', 'moss'])('%s multiplies, counts and stores: a few thousand gates, and patterns that fit it', (name) => {
    const files = demoFiles()
    const netlist = readBench({ name, text: files.get(`${name}.bench`)! }).value!
    expect(netlist.report.gates).toBeGreaterThan(1000)
    expect(netlist.circuit.flipFlops.length).toBeGreaterThan(50)
    for (const set of ['a', 'b']) {
      const reading = readVectors({ name: set, text: files.get(`${name}-${set}.vec`)! }, netlist.circuit)
      expect(reading.diagnostics).toEqual([])
    }
  })
})
