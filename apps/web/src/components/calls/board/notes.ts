import type { CallView, ItemView } from '@bellpull/contracts'
import { CATEGORY_RULES } from '@bellpull/domain'
import { shortName } from '@/composables/names'
import type { TextKey } from '@/composables/useText'
import type { Viewer } from './next-action'
import type { BoardRow, Counts } from './rows'

/** A sentence and what goes into it; the screen puts it into its language. */
export interface Words {
  readonly key: TextKey
  readonly named: Record<string, string | number>
}

/** The sentences of Dispatch, without the name of their area. */
type Said = TextKey extends infer K ? (K extends `dispatch.${infer Rest}` ? Rest : never) : never

const say = (key: Said, named: Words['named'] = {}): Words => ({ key: `dispatch.${key}` as TextKey, named })

const ZONES = ['core', 'loanerRack', 'hatch', 'quarantine', 'returns'] as const

/** Time of day of an instant in the house's zone, "10:47". */
export type TimeOfDay = (instant: string) => string

/** Whole minutes since an instant, never less than 0. */
export const minutesSince = (instant: string, nowMs: number): number =>
  Math.max(0, Math.floor((nowMs - Date.parse(instant)) / 60_000))

/** The place where a held package lies, "core C3-09" or "this room". */
export function placeWords(call: CallView, item: ItemView): Words {
  const location = item.unit?.location
  if (!location) return say('place.none')
  if (location.zone === 'room') return say('place.room', { room: call.room.number })
  const zone = ZONES.find((one) => one === location.zone)
  return zone
    ? say(`place.${zone}`, { code: location.code })
    : say('place.elsewhere', { code: location.code })
}

/** An alternative without what it shares with the item called: "52" for "Head 52 concentric" beside "Head 50 concentric". */
export function shortAlternative(item: ItemView, label: string): string {
  const prefix =
    item.size !== null && item.label.endsWith(item.size) ? item.label.slice(0, -item.size.length) : ''
  const suffix = item.variant === null ? '' : ` ${item.variant}`
  let short = prefix !== '' && label.startsWith(prefix) ? label.slice(prefix.length) : label
  if (suffix !== '' && short.endsWith(suffix)) short = short.slice(0, -suffix.length)
  return short
}

/**
 * What the cord says at the station reached.
 * @param place the place in words, already put into the language of the screen.
 */
export function cordNote(row: BoardRow, nowMs: number, place: string, timeOfDay: TimeOfDay): Words | null {
  const { call, item, late, escalation } = row
  if (item.outcome !== null) return item.putBack ? say('note.putBack', { code: item.putBack.toCode }) : null
  switch (item.stage) {
    case 'called':
      return calledNote(row, place)
    case 'accepted':
      if (!item.unit)
        return item.acceptedAt === null ? null : say('note.accepted', { time: timeOfDay(item.acceptedAt) })
      return say(late ? 'note.stillIn' : 'note.toFetch', { place, code: item.unit.location.code })
    case 'pulled':
      return item.pulledAt === null ? null : pulledNote(minutesSince(item.pulledAt, nowMs))
    case 'inRoom':
      if (CATEGORY_RULES[item.category].check === 'none')
        return item.inRoomAt === null ? null : say('note.inRoom', { time: timeOfDay(item.inRoomAt) })
      if (call.readBack === null) return say('note.readBackToDo')
      return say(CATEGORY_RULES[item.category].check === 'two-people' ? 'note.twoChecks' : 'note.oneCheck')
    case 'verified':
      return item.verifiedAt === null ? null : say('note.verified', { time: timeOfDay(item.verifiedAt) })
    case 'opened':
      return item.openedAt === null ? null : say('note.opened', { time: timeOfDay(item.openedAt) })
  }

  function pulledNote(minutes: number): Words {
    return minutes === 0 ? say('note.pulled') : say('note.pulledAgo', { minutes })
  }

  function calledNote({ walk }: BoardRow, where: string): Words {
    if (item.hold === 'noneFree') {
      const [first, second] = item.alternatives.map((one) => shortAlternative(item, one.label))
      if (first === undefined) return say('note.nothingNear')
      return second === undefined ? say('note.oneNear', { first }) : say('note.twoNear', { first, second })
    }
    if (escalation > 0)
      return say('note.notAccepted', {
        minutes: minutesSince(call.confirmedAt ?? call.calledAt, nowMs),
        place: where,
      })
    return say(walk.length > 1 ? `note.${call.kind}SameWalk` : `note.${call.kind}`, { place: where })
  }
}

/** When it is needed, as short as the row allows. */
export function neededWords(row: BoardRow, nowMs: number, timeOfDay: TimeOfDay): Words {
  const { call, item, late } = row
  if (item.outcome !== null)
    return item.putBack
      ? say('needed.putBack', { minutes: minutesSince(item.putBack.since, nowMs) })
      : say('needed.done')
  if (item.stage === 'opened' && item.openedAt)
    return say('needed.opened', { time: timeOfDay(item.openedAt) })
  if (call.neededAt === null) return say('needed.standby')
  const time = timeOfDay(call.neededAt)
  if (late) return say('needed.late', { time })
  const minutes = Math.ceil((Date.parse(call.neededAt) - nowMs) / 60_000)
  if (['inRoom', 'verified'].includes(item.stage))
    return minutes > 0 && minutes <= 10 ? say('needed.in', { minutes }) : say('needed.at', { time })
  if (minutes <= 0) return say('needed.now')
  return minutes <= 10 ? say('needed.in', { minutes }) : say('needed.at', { time })
}

/** With whom it is. */
export function withWords(item: ItemView, viewer: Viewer): Words {
  const person = item.acceptedBy
  if (!person) return say('with.nobody')
  if (person.id === viewer.id) return say('with.you')
  return { key: 'dispatch.with.person', named: { name: shortName(person.name), role: person.role } }
}

/** "1 without a package, 2 waiting, 4 on the way or in a room": the parts that are not zero, in this order. */
export function countWords(counts: Counts): Words[] {
  return (['noneFree', 'waiting', 'moving', 'putBack'] as const)
    .filter((name) => counts[name] > 0)
    .map((name) => say(`counts.${name}`, { n: counts[name] }))
}
