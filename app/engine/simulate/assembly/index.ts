export { patternsPerBlock } from './plane'
export { attach, layoutVersion } from './memory'
export { evaluateGood } from './good'
export { beginBlock, simulateRegions, simulateTaps } from './regions'
