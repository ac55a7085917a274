import { nextAction, menuFor, type ActionName, type Viewer } from '@/components/calls/board/next-action'
import { shortAlternative } from '@/components/calls/board/notes'
import { useRowWords } from '@/components/calls/board/useRowWords'
import { nameOf } from '@/composables/item'
import { shortName } from '@/composables/names'
import { useText } from '@/composables/useText'
import { useTimes } from '@/composables/useTimes'
import type { FetchLine } from './fetch-list'

type Detail = { text: string; late?: boolean; mark?: boolean }

/** Puts a line of To fetch into words. */
export function useFetchWords() {
  const { t } = useText()
  const { time, day } = useTimes()
  const { sideText } = useRowWords()

  /** "for room 3, by 11:02, early" */
  function forRoom({ call, late }: FetchLine, nowMs: number): string {
    const room = call.room.number
    if (late) return t('fetch.line.forRoom', { room })
    const early = call.kind === 'early' ? `, ${t('fetch.line.early')}` : ''
    if (call.neededAt === null) return t('fetch.line.forRoomStandby', { room })
    if (call.kind === 'confirmed' && Date.parse(call.neededAt) - nowMs < 60_000)
      return t('fetch.line.forRoomNow', { room })
    return t('fetch.line.forRoomBy', { room, time: time(call.neededAt) }) + early
  }

  function label({ item }: FetchLine, today: string): Detail[] {
    if (!item.unit) return item.ref === '' ? [] : [{ text: item.ref }]
    const { lot, serial, useByOn } = item.unit
    const named = { ref: item.ref, lot, day: day(useByOn).replaceAll(' ', '\u00a0') }
    return [
      {
        text:
          serial === null ? t('fetch.line.label', named) : t('fetch.line.labelSerial', { ...named, serial }),
      },
      ...(useByOn === today ? [{ text: t('fetch.line.lastDay'), mark: true }] : []),
    ]
  }

  const lateness = ({ call, late }: FetchLine): Detail[] =>
    late && call.neededAt ? [{ text: t('fetch.line.needed', { time: time(call.neededAt) }), late: true }] : []

  function walkDetails(line: FetchLine, viewer: Viewer, today: string): Detail[] {
    const { item } = line
    const by = item.acceptedBy
    const who =
      by &&
      (by.id === viewer.id ? t('fetch.line.withYou') : t('fetch.line.with', { name: shortName(by.name) }))
    return [...lateness(line), ...label(line, today), ...(who ? [{ text: who }] : [])]
  }

  const hatchDetails = (line: FetchLine, viewer: Viewer): Detail[] => [
    ...lateness(line),
    coming(line, viewer),
  ]

  function coming({ item }: FetchLine, viewer: Viewer): Detail {
    const since = item.pulledAt === null ? '' : time(item.pulledAt)
    const by = item.acceptedBy
    if (by === null || by.role === 'core')
      return { text: t('fetch.hatch.nobody', { time: since }), mark: true }
    if (by.id === viewer.id) return { text: t('fetch.hatch.comingYou', { time: since }) }
    return { text: t('fetch.hatch.coming', { time: since, name: shortName(by.name) }) }
  }

  function putBackWhy({ call, item }: FetchLine): string {
    const room = call.room.number
    if (item.outcome === 'changed') return t('fetch.putBack.changed', { room })
    return item.outcome === 'cancelled'
      ? t('fetch.putBack.cancelled', { room })
      : t('fetch.putBack.returned', { room })
  }

  function putBackDetails({ item }: FetchLine): Detail[] {
    return [
      ...(item.putBack?.inspect ? [{ text: t('fetch.putBack.inspect'), mark: true }] : []),
      ...(item.unit ? [{ text: t('fetch.putBack.lot', { ref: item.ref, lot: item.unit.lot }) }] : []),
    ]
  }

  /** Sizes that are there and who holds this one, as facts. */
  function facts({ item }: FetchLine): { sizes: string[]; holders: string } {
    const sizes = item.alternatives.flatMap((one) => {
      const size = shortAlternative(item, one.label)
      return [
        ...(one.inRoom > 0 ? [t('fetch.facts.inRoom', { size, n: one.inRoom })] : []),
        ...(one.inCore > 0 ? [t('fetch.facts.inCore', { size, n: one.inCore })] : []),
      ]
    })
    const holders = item.heldBy.map(({ room, kind }) =>
      t('fetch.facts.holder', { room: room.number, kind: t(`dispatch.row.${kind}`) }),
    )
    return {
      sizes,
      holders:
        holders.length > 0
          ? t('fetch.facts.holders', { holders: holders.join(', ') })
          : t('fetch.facts.noHolder'),
    }
  }

  /** Whatever else this person may do for the line, without what its own button does. */
  function menu(
    { call, item }: FetchLine,
    viewer: Viewer,
    undoable: boolean,
    without: readonly ActionName[],
  ) {
    const next = nextAction(call, item, viewer).action
    const all = [...(next ? [next] : []), ...menuFor(call, item, viewer, undoable)]
    return all
      .filter((name) => !without.includes(name))
      .map((key) => ({
        key,
        text: t(`dispatch.action.${key as 'accept'}`),
        heavy: key === 'cancel' || key === 'cancelCall',
      }))
  }

  const menuLabel = ({ call, item }: FetchLine): string =>
    t('dispatch.row.more', { item: nameOf(item), room: call.room.number })

  return { forRoom, walkDetails, hatchDetails, putBackWhy, putBackDetails, facts, menu, menuLabel, sideText }
}
