import type { CallView, ItemView } from '@bellpull/contracts'

/**
 * Bins that lie no further apart than this on the core's walking order are one walk; bins in a row count 10.
 * Common practice, no source.
 */
export const ONE_WALK = 250

/** Where a held package lies in its bin, or `null` when there is nothing to walk for. */
const binOf = (item: ItemView): { zone: string; order: number } | null =>
  item.unit === null || item.walkOrder === null || item.unit.location.zone === 'room'
    ? null
    : { zone: item.unit.location.zone, order: item.walkOrder }

/** Waits to be accepted and has a package. */
export const isReady = (item: ItemView): boolean =>
  item.outcome === null && item.stage === 'called' && item.hold !== 'noneFree'

/**
 * The items of a call that one person brings on one walk: two or more that wait, all that wait, each bin near
 * the one before. Empty when they are far apart: then nobody is asked to take them in one tap.
 */
export function oneWalk(call: CallView): ItemView[] {
  const ready = call.items.filter(isReady)
  if (ready.length < 2) return []
  const bins = ready
    .map((item) => ({ item, bin: binOf(item) }))
    .sort((a, b) => (a.bin?.order ?? 0) - (b.bin?.order ?? 0))
  const near = bins.every(({ bin }, index) => {
    const before = bins[index - 1]?.bin
    if (bin === null) return false
    return index === 0 || (before?.zone === bin.zone && bin.order - before.order <= ONE_WALK)
  })
  return near ? bins.map(({ item }) => item) : []
}
