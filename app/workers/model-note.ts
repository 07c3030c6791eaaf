import type { PlanPricing } from '../engine/choose/plan-pricing.ts'
import { resolveYield } from '../engine/quality/yield.ts'

/** Returns what the models assume, in words: "Williams and Brown 1981, yield 94.0 %". */
export function modelNote({
  pricing: { product, trueYield },
  deliveredCoverage,
}: Pick<PlanPricing, 'pricing' | 'deliveredCoverage'>): string {
  const { origin } = resolveYield(product, deliveredCoverage)
  const model =
    product.model === 'williams-brown'
      ? 'Williams and Brown 1981'
      : `Agrawal, Seth and Agrawal 1982, n0 = ${product.n0}`
  const from = origin === 'given' ? '' : origin === 'assumed' ? ', assumed' : `, from ${origin}`
  return `${model}, yield ${(100 * trueYield).toFixed(1)} %${from}`
}
