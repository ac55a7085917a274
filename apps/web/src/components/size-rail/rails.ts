import type { CaseView, RailView, SizeView } from '@bellpull/contracts'
import type { PartKind } from '@bellpull/domain'

export type PlanLine = CaseView['plan'][number]

/** Parts that are chosen together and so stand under each other; earlier ones win a part. */
const TOGETHER: readonly (readonly PartKind[])[] = [
  ['shell', 'liner'],
  ['femur', 'tibia'],
  ['insert', 'patella'],
  ['glenoid', 'cement'],
]

/** One screenful of rails, reached by one touch. */
export interface RailPage {
  readonly id: string
  readonly rails: readonly RailView[]
}

/** The name of a rail, the same for every answer of the server. */
export const railKey = (rail: Pick<RailView, 'system' | 'kind' | 'label'>): string =>
  `${rail.system}/${rail.kind}/${rail.label}`

/**
 * Rails in screenfuls: parts that belong together, then what is left. Head and stem come first in a shoulder;
 * in a hip the cup is set before the stem.
 */
export function pagesOf(rails: readonly RailView[]): RailPage[] {
  const has = (kind: PartKind): boolean => rails.some((rail) => rail.kind === kind)
  const femoral: readonly PartKind[] = has('shell') ? ['stem', 'head'] : ['head', 'stem']
  const order = has('shell') ? [TOGETHER[0]!, femoral] : [femoral, ...TOGETHER]
  const left = new Set(rails)
  const pages: RailPage[] = []
  for (const kinds of order) {
    // Cement goes with the glenoid; without one it stands among the rest.
    if (!kinds.some((kind) => kind !== 'cement' && has(kind))) continue
    const mine = kinds.flatMap((kind) => [...left].filter((rail) => rail.kind === kind))
    for (const rail of mine) left.delete(rail)
    if (mine.length > 0) pages.push({ id: kinds.filter(has).join('-'), rails: mine })
  }
  if (left.size > 0) pages.push({ id: 'other', rails: withSuppliesTogether([...left]) })
  return pages
}

/** The system of parts that belong to none: cement, drill bits and other supplies. */
const NO_SYSTEM = ''
const isSupply = (rail: RailView): boolean => rail.system === NO_SYSTEM

/** Supplies that come in one kind only stand side by side, not in a rail each. */
function withSuppliesTogether(rails: readonly RailView[]): RailView[] {
  const single = rails.filter((rail) => isSupply(rail) && rail.sizes.length === 1)
  if (single.length < 2) return [...rails]
  const together = { ...single[0]!, label: SUPPLIES, sizes: single.flatMap(({ sizes }) => sizes) }
  return [...rails.filter((rail) => !single.includes(rail)), together]
}

/** Stands for the rail of single supplies; its words are the screen's. */
export const SUPPLIES = 'supplies'

/** Called in number, not by size: cement and supplies. */
export const isInNumber = (rail: RailView): boolean => isSupply(rail)

/** The variants of a rail in the order of the catalogue; empty where sizes have none. */
export const variantsOf = (rail: RailView): string[] => [
  ...new Set(rail.sizes.flatMap(({ variant }) => (variant === null ? [] : [variant]))),
]

/** So few keys that every variant has its own, with its name on it. */
const FEW_KEYS = 6

/** Whether the variant has to be said before a size can be. */
export const needsVariant = (rail: RailView): boolean =>
  variantsOf(rail).length > 1 && rail.sizes.length > FEW_KEYS

export const planFor = (rail: RailView, plan: readonly PlanLine[]): PlanLine | null =>
  plan.find((line) => line.kind === rail.kind && line.system === rail.system) ?? null

/** The variant that the plan names, or the only one there is; never a guess. */
export function firstVariant(rail: RailView, plan: PlanLine | null): string | null {
  const variants = variantsOf(rail)
  if (plan !== null && plan.variant !== null && variants.includes(plan.variant)) return plan.variant
  return variants.length === 1 ? variants[0]! : null
}

/** The keys of a rail: one variant's sizes, or all where the variant need not be said first. */
export const sizesOf = (rail: RailView, variant: string | null): SizeView[] =>
  needsVariant(rail) && variant !== null ? rail.sizes.filter((size) => size.variant === variant) : rail.sizes

/** Every size once, with what there is of all its variants: while no variant has been said. */
export function ofAllVariants(sizes: readonly SizeView[]): SizeView[] {
  const sum = (all: readonly SizeView[], of: (size: SizeView) => number): number =>
    all.reduce((total, size) => total + of(size), 0)
  return [...new Set(sizes.map(({ label }) => label))].map((label) => {
    const same = sizes.filter((size) => size.label === label)
    return {
      ...same[0]!,
      variant: null,
      inRoom: sum(same, ({ inRoom }) => inRoom),
      inCore: sum(same, ({ inCore }) => inCore),
      heldElsewhere: sum(same, ({ heldElsewhere }) => heldElsewhere),
      stocked: same.some(({ stocked }) => stocked),
      soonestUseByOn: null,
    }
  })
}

/** Sizes said in two words ("36 +4", "G2 10") are laid by their first word. */
const firstWord = (size: SizeView): string => size.label.split(' ')[0]!
const inTwoWords = (sizes: readonly SizeView[]): boolean => sizes.every(({ label }) => / [+\-\d]/.test(label))

/**
 * Keys in rows of at most `most`, evenly filled; a group of sizes that begins with the same word is not torn
 * apart where it fits a row.
 */
export function rowsOf(sizes: readonly SizeView[], most: number): SizeView[][] {
  if (sizes.length === 0) return []
  const groups = inTwoWords(sizes)
    ? [...new Set(sizes.map(firstWord))].map((word) => sizes.filter((size) => firstWord(size) === word))
    : sizes.map((size) => [size])
  const widest = Math.max(...groups.map((group) => group.length))
  if (widest > most) return chunks(sizes, evenly(sizes.length, most))
  if (widest === 1) return chunks(sizes, evenly(sizes.length, most))
  const rows: SizeView[][] = []
  const limit = Math.max(widest, evenly(sizes.length, most))
  for (const group of groups) {
    const row = rows.at(-1)
    if (row && row.length + group.length <= limit) row.push(...group)
    else rows.push([...group])
  }
  return rows
}

const evenly = (count: number, most: number): number =>
  Math.ceil(count / Math.ceil(count / Math.max(1, most)))

function chunks<T>(all: readonly T[], size: number): T[][] {
  return Array.from({ length: Math.ceil(all.length / size) }, (_, index) =>
    all.slice(index * size, (index + 1) * size),
  )
}

/** Diameters in mm of a row that can stand on a millimetre rule: each larger than the one before. */
export function ruleOf(row: readonly SizeView[]): number[] | null {
  const all = row.flatMap(({ diameterMm }) => (diameterMm === null ? [] : [diameterMm]))
  if (all.length < 2 || all.length < row.length) return null
  return all.every((mm, index) => index === 0 || mm > all[index - 1]!) ? all : null
}

/** Half a key before the first centre and half a key behind the last, in mm. */
export function endsOf(diametersMm: readonly number[]): readonly [fromMm: number, toMm: number] {
  const [first, second] = diametersMm as [number, number]
  const last = diametersMm.at(-1)!
  return [first - (second - first) / 2, last + (last - diametersMm.at(-2)!) / 2]
}

/** Where a length lies on a row of equal keys, from 0 at its left edge to 1; straight between key centres. */
export function fractionOf(diametersMm: readonly number[], mm: number): number {
  const centres = [endsOf(diametersMm)[0], ...diametersMm, endsOf(diametersMm)[1]]
  const at = [0, ...diametersMm.map((_, index) => (index + 0.5) / diametersMm.length), 1]
  const next = Math.min(
    Math.max(
      1,
      centres.findIndex((centre) => centre >= mm),
    ),
    centres.length - 1,
  )
  if (mm >= centres.at(-1)!) return 1
  const from = centres[next - 1]!
  const share = (mm - from) / (centres[next]! - from)
  return Math.max(0, at[next - 1]! + share * (at[next]! - at[next - 1]!))
}

/** The length at a place on the row, the way back from {@link fractionOf}. */
export function mmAt(diametersMm: readonly number[], fraction: number): number {
  const centres = [endsOf(diametersMm)[0], ...diametersMm, endsOf(diametersMm)[1]]
  const at = [0, ...diametersMm.map((_, index) => (index + 0.5) / diametersMm.length), 1]
  const wanted = Math.min(1, Math.max(0, fraction))
  const next = Math.max(
    1,
    at.findIndex((place) => place >= wanted),
  )
  const share = (wanted - at[next - 1]!) / (at[next]! - at[next - 1]!)
  return centres[next - 1]! + share * (centres[next]! - centres[next - 1]!)
}

/** A cut is measured in steps of half a millimetre. */
export const CUT_STEP_MM = 0.5
export const toCutStep = (mm: number): number => Math.round(mm / CUT_STEP_MM) * CUT_STEP_MM

/** Whether a cut surface can be laid beside these sizes: heads with one base diameter each and a height. */
export const isMeasured = (rail: RailView, sizes: readonly SizeView[]): boolean =>
  rail.kind === 'head' && ruleOf(sizes) !== null && sizes.every(({ heightMm }) => heightMm !== null)

export type PlanMark = 'planned' | 'inRange' | null

/** How the plan speaks of a size; `sizes` in order of size. */
export function planMark(size: SizeView, sizes: readonly SizeView[], plan: PlanLine | null): PlanMark {
  if (plan === null) return null
  if (plan.variant !== null && size.variant !== plan.variant) return null
  if (size.label === plan.planned) return 'planned'
  if (plan.from === null || plan.to === null) return null
  const labels = sizes.map(({ label }) => label)
  const [at, from, to] = [size.label, plan.from, plan.to].map((label) => labels.indexOf(label)) as [
    number,
    number,
    number,
  ]
  return from >= 0 && to >= 0 && at >= from && at <= to ? 'inRange' : null
}

const SOON_DAYS = 30

/** The soonest use-by day of what is free, when it is at most thirty days away. @param today house day. */
export function soonUseBy(size: SizeView, today: string): string | null {
  if (size.soonestUseByOn === null) return null
  const days = (Date.parse(size.soonestUseByOn) - Date.parse(today)) / 86_400_000
  return days <= SOON_DAYS ? size.soonestUseByOn : null
}

/** What of these is free here or in the core. */
export const freeOf = (size: Pick<SizeView, 'inRoom' | 'inCore'>): number => size.inRoom + size.inCore

const SPOKEN_ALONE = /^[A-Z][a-z]/

/**
 * What is said for a size without its variant: "head 50"; for what has a name of its own, that name.
 * @param part the part's word ("head"), for parts; supplies take the name of their rail.
 */
export function spokenSize(
  rail: Pick<RailView, 'kind' | 'label'>,
  size: Pick<SizeView, 'label'>,
  part: string,
): string {
  if (rail.kind !== 'other' && rail.kind !== 'cement') return `${part} ${size.label}`
  if (SPOKEN_ALONE.test(size.label)) return lowerFirst(size.label)
  return `${lowerFirst(rail.label)} ${size.label}`
}

export const lowerFirst = (text: string): string => text.charAt(0).toLowerCase() + text.slice(1)
export const upperFirst = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)
