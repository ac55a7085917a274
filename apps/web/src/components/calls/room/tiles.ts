import type { ItemView } from '@bellpull/contracts'
import { PART_KINDS } from '@bellpull/domain'
import { isNoneFree } from '@/composables/item'

/** What was called, large: one tile a part, as it is said aloud. */
export interface CalledTile {
  readonly key: string
  /** "Head"; for what has no size, nothing. */
  readonly part: string
  /** "50", "48, 50, 52", "2 × 40", or the words themselves. */
  readonly size: string
  readonly variant: string | null
  /** No package could be held for it. */
  readonly noneFree: boolean
}

/** Items of one call as tiles; a range stands in one, and so does what is called in number. */
export function tilesOf(items: readonly ItemView[]): CalledTile[] {
  const likeness = (item: ItemView): string =>
    item.category === 'implant'
      ? `${item.kind} ${item.partName} ${item.variant ?? ''}`
      : (item.catalogueItemId ?? item.id)
  const groups = [...new Set(items.map(likeness))].map((key) =>
    items.filter((item) => likeness(item) === key),
  )
  return groups
    .map((group): CalledTile => {
      const first = group[0]!
      const { part, size } = partAndSize(first)
      const sizes = [...new Set(group.map((item) => partAndSize(item).size))]
      const count = group.length / sizes.length
      return {
        key: first.id,
        part,
        size:
          count > 1 && Number.isInteger(count) ? `${count} × ${sizes.join(', ')}` : sizes.join(', ') || size,
        variant: first.variant,
        noneFree: group.some(isNoneFree),
      }
    })
    .sort((a, b) => orderOf(a, items) - orderOf(b, items))
}

/** "Head 50" is said as its part and its size; what does not end in its size is said whole. */
export function partAndSize(item: Pick<ItemView, 'label' | 'size'>): { part: string; size: string } {
  if (item.size === null || item.label === item.size || !item.label.endsWith(` ${item.size}`))
    return { part: '', size: item.label }
  return { part: item.label.slice(0, -item.size.length - 1), size: item.size }
}

const orderOf = (tile: CalledTile, items: readonly ItemView[]): number => {
  const item = items.find(({ id }) => id === tile.key)
  return item === undefined ? PART_KINDS.length : PART_KINDS.indexOf(item.kind)
}
