import type { CaseView, MakeCall } from '@bellpull/contracts'
import type { CallKind, PartKind } from '@bellpull/domain'

/** One thing chosen for the call that is being put together. */
export interface DraftLine {
  /** The rail it was chosen on. */
  readonly railKey: string
  readonly kind: PartKind
  readonly catalogueItemId: string
  /** "Head", as it stands over the size. */
  readonly part: string
  readonly size: string
  /** Said wherever the rail has more than one. */
  readonly variant: string | null
  /** "head 50 concentric": what is said aloud. */
  readonly said: string
  readonly quantity: number
  /** Called in number, as cement and drill bits are. */
  readonly inNumber: boolean
}

/** A call that is being put together; nothing in it has a default but its kind and time. */
export interface Draft {
  readonly kind: CallKind
  /** Minutes for each kind that has a time, kept while another kind is looked at. */
  readonly minutes: Readonly<Record<'early' | 'confirmed', number>>
  readonly lines: readonly DraftLine[]
  readonly text: string
  /** Whose word it is. */
  readonly calledBy: string
}

/** The times that can be said, in minutes; 0 is now. */
export const MINUTES = [0, 5, 10, 15, 20, 30, 45] as const

export const MOST_OF_ONE = 9
const MOST_LINES = 20

export const newDraft = (of: Pick<CaseView, 'surgeon'>): Draft => ({
  kind: 'early',
  minutes: { early: 10, confirmed: 0 },
  lines: [],
  text: '',
  calledBy: of.surgeon.id,
})

export const isEmpty = (draft: Draft): boolean => draft.lines.length === 0 && draft.text.trim() === ''

/** Minutes until needed; `null` for stand by. */
export const minutesOf = (draft: Draft): number | null =>
  draft.kind === 'standby' ? null : draft.minutes[draft.kind]

export function withMinutes(draft: Draft, minutes: number): Draft {
  return draft.kind === 'standby' ? draft : { ...draft, minutes: { ...draft.minutes, [draft.kind]: minutes } }
}

/** The next time that can be said, later or sooner; stays at the ends. */
export function stepMinutes(minutes: number, by: 1 | -1): number {
  const at = MINUTES.findIndex((one) => one === minutes)
  return MINUTES[Math.min(MINUTES.length - 1, Math.max(0, at + by))] ?? minutes
}

/**
 * A touch on a size: chosen, or let go when it was chosen. A rail gives one size to a call, a stand-by call
 * takes a range, and what is called in number stands beside its likes.
 */
export function touch(draft: Draft, line: DraftLine): Draft {
  const chosen = draft.lines.some((one) => one.catalogueItemId === line.catalogueItemId)
  if (chosen) return without(draft, line.catalogueItemId)
  const kept =
    draft.kind === 'standby' || line.inNumber
      ? draft.lines
      : draft.lines.filter((one) => one.railKey !== line.railKey)
  return kept.length >= MOST_LINES ? draft : { ...draft, lines: [...kept, line] }
}

/** Instead of whatever was chosen on its rail: a fact was touched, and now it is the choice. */
export function instead(draft: Draft, line: DraftLine): Draft {
  return { ...draft, lines: [...draft.lines.filter((one) => one.railKey !== line.railKey), line] }
}

export const without = (draft: Draft, catalogueItemId: string): Draft => ({
  ...draft,
  lines: draft.lines.filter((one) => one.catalogueItemId !== catalogueItemId),
})

export function withQuantity(draft: Draft, catalogueItemId: string, quantity: number): Draft {
  const clamped = Math.min(MOST_OF_ONE, Math.max(1, quantity))
  return {
    ...draft,
    lines: draft.lines.map((one) =>
      one.catalogueItemId === catalogueItemId ? { ...one, quantity: clamped } : one,
    ),
  }
}

/** Rails with more than one size chosen: a range, which only a stand-by call can be. */
export function rangesIn(draft: Draft): DraftLine[][] {
  const groups = groupsOf(draft.lines)
  return groups.filter((group) => group.length > 1 && !group[0]!.inNumber)
}

/** Lines of one rail together, in the order in which the rails were first touched. */
export function groupsOf(lines: readonly DraftLine[]): DraftLine[][] {
  return [...new Set(lines.map((one) => one.railKey))].map((key) =>
    lines.filter((one) => one.railKey === key),
  )
}

/** "head 48, 50, 52 concentric" for a range; else every line as it is said. */
export function sayLines(lines: readonly DraftLine[], text = ''): string {
  const parts = groupsOf(lines).flatMap((group) => {
    const [first] = group
    if (group.length === 1 || first!.inNumber || new Set(group.map((one) => one.variant)).size > 1)
      return group.map(sayOne)
    const sizes = group.map((one) => one.size).join(', ')
    return [`${first!.part.toLowerCase()} ${sizes}${first!.variant === null ? '' : ` ${first!.variant}`}`]
  })
  return [...parts, ...(text.trim() === '' ? [] : [text.trim()])].join(', ')
}

const sayOne = (line: DraftLine): string =>
  line.quantity > 1 ? `${line.quantity} × ${line.said}` : line.said

/** The call as the server takes it. */
export function bodyOf(draft: Draft, of: Pick<CaseView, 'side'>): MakeCall {
  return {
    kind: draft.kind,
    neededInMinutes: minutesOf(draft),
    calledBy: draft.calledBy,
    side: of.side,
    items: [
      ...draft.lines.map(({ catalogueItemId, quantity }) => ({ catalogueItemId, quantity })),
      ...(draft.text.trim() === '' ? [] : [{ text: draft.text.trim() }]),
    ],
  }
}
