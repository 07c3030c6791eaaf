export { patternsPerBlock } from './plane'
export { attach, layoutVersion } from './memory'
export { loadBlock, usePatterns } from './block'
export { simulateRegions, simulateTaps } from './simulate'
