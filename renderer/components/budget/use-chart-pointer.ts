import { onBeforeUnmount, ref, type Ref } from 'vue'
import { boxOf } from '../../charts/box-of.ts'
import { moveSpan, zoomCoverage, zoomPatterns } from '../../charts/chart-window.ts'
import { nearestIndex, placeOf } from '../../charts/column-search.ts'
import { clamp, valueAt, xPixel } from '../../charts/plot-geometry.ts'
import { useBudget } from '../../stores/budget.ts'
import { cutAfterKey, snapped } from './cut-moves.ts'
import type { CoverageScene } from './use-coverage-scene.ts'
import type { Cut } from './use-cut.ts'

const SNAP_PIXELS = 6
/** A wheel's notch is about 100; this much of it zooms by a factor of e. */
const WHEEL_PER_E = 320

/** Moves the cut and the part in view by pointer, wheel and keys. */
export function useChartPointer(box: Readonly<Ref<HTMLElement | null>>, scene: CoverageScene, cut: Cut) {
  const budget = useBudget()
  const hovered = ref<{ readonly at: number; readonly x: number; readonly y: number } | null>(null)
  const dragStart = ref<number | null>(null)

  const pixelOf = (at: number): number =>
    xPixel(scene.xs.value[at] ?? 0, scene.window.value, scene.plot.value)

  function inBox(event: MouseEvent): { x: number; y: number } {
    return box.value ? boxOf(box.value).placeOf(event) : { x: 0, y: 0 }
  }

  function press(event: PointerEvent): void {
    if (event.button !== 0) return
    box.value?.setPointerCapture(event.pointerId)
    dragStart.value = budget.cut
    hovered.value = null
    follow(event)
  }

  function follow(event: PointerEvent): void {
    const { x, y } = inBox(event)
    const { left, right, top, bottom } = scene.plot.value
    const at = nearestIndex(scene.xs.value, valueAt(x, scene.window.value.x, left, right))
    if (dragStart.value !== null) {
      budget.moveTo(event.altKey ? at : snapped(at, cut.stops.value, pixelOf, SNAP_PIXELS))
      return
    }
    const isInside = x >= left && x <= right && y >= top && y <= bottom
    hovered.value = isInside ? { at, x: pixelOf(at), y } : null
  }

  function release(): void {
    dragStart.value = null
  }

  let wheeled: WheelEvent[] = []
  let frame = 0
  onBeforeUnmount(() => cancelAnimationFrame(frame))

  /** However many turns of the wheel arrive, the chart is drawn once a frame. */
  function wheel(event: WheelEvent): void {
    event.preventDefault()
    hovered.value = null
    wheeled.push(event)
    if (wheeled.length === 1) frame = requestAnimationFrame(zoomByWheel)
  }

  function zoomByWheel(): void {
    const last = wheeled.at(-1)
    const turned = wheeled.reduce((sum, { deltaX, deltaY }) => sum + (deltaY || deltaX), 0)
    wheeled = []
    if (!last) return
    const { x, y } = inBox(last)
    const { left, right, top, bottom } = scene.plot.value
    const factor = Math.exp(clamp(turned, -400, 400) / WHEEL_PER_E)
    const value = valueAt(x, scene.window.value.x, left, right)
    scene.place.value = last.shiftKey
      ? zoomCoverage(scene.current.value, factor, valueAt(y, scene.window.value.y, bottom, top))
      : zoomPatterns(scene.current.value, factor, placeOf(scene.xs.value, value), budget.patterns)
  }

  /** Returns whether the key was for the chart. */
  function key(event: KeyboardEvent): boolean {
    if (event.ctrlKey || event.metaKey || event.altKey) return false
    if (event.key === 'Escape') {
      if (dragStart.value === null) return false
      budget.moveTo(dragStart.value)
      dragStart.value = null
      return true
    }
    const { cut: at, patterns } = budget
    const moved = cutAfterKey(event, { cut: at, patterns, ...cut.ends.value, stops: cut.stops.value })
    if (moved === null) return false
    budget.moveTo(moved)
    keepInView()
    return true
  }

  /** Moves the view after a cut that keys have taken out of it. */
  function keepInView(): void {
    const { patterns } = scene.current.value
    const { cut: at } = budget
    if (at >= patterns.from && at <= patterns.to) return
    const by = at < patterns.from ? at - patterns.from : at - patterns.to
    const moved = moveSpan(patterns, by, { from: 0, to: budget.patterns })
    scene.place.value = { ...scene.current.value, patterns: moved }
  }

  return { hovered, press, follow, release, wheel, key, keepInView }
}
