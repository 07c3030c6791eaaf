const LABELS: Readonly<Record<string, string>> = {
  bench: 'Bench',
  verilog: 'Structural Verilog',
  liberty: 'Liberty',
  stil: 'STIL',
  vectors: 'Vectors',
  csv: 'CSV',
}

/** Returns a format's name as people write it. */
export function formatLabel(name: string): string {
  return LABELS[name] ?? name
}
