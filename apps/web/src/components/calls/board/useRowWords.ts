import type { CallView, ItemView } from '@bellpull/contracts'
import { nameOf } from '@/composables/item'
import { shortName } from '@/composables/names'
import { useText, type TextKey } from '@/composables/useText'
import { useTimes } from '@/composables/useTimes'
import { menuFor, nextAction, toneOf, type ActionName, type Tone, type Viewer } from './next-action'
import { cordNote, neededWords, placeWords, withWords, type Words } from './notes'
import type { BoardRow } from './rows'

/** What a row says and offers, in the language of the screen. */
export interface RowWords {
  readonly name: string
  readonly called: string
  readonly kind: string
  readonly sideText: string
  readonly note: string
  readonly needed: string
  /** The same where no column says what it is: "needed 11:02". */
  readonly neededLong: string
  readonly with: string
  /** The button, or what the row waits for. */
  readonly action: ActionName | null
  readonly actionText: string
  readonly tone: Tone
  readonly menu: readonly { key: ActionName; text: string; heavy: boolean }[]
}

const HEAVY: readonly ActionName[] = ['cancel', 'cancelCall', 'notImplanted']

const isTime = ({ key }: Words): boolean =>
  key === 'dispatch.needed.at' || key === 'dispatch.needed.in' || key === 'dispatch.needed.now'

/** Puts a row of the board into words. */
export function useRowWords() {
  const { t } = useText()
  const { time } = useTimes()
  const say = (words: Words | null): string => (words === null ? '' : t(words.key, words.named))

  const placeOf = (call: CallView, item: ItemView): string => say(placeWords(call, item))

  const calledBy = (call: CallView): string =>
    t('dispatch.row.called', { time: time(call.calledAt), who: shortName(call.calledBy.name) })

  /** "case LEFT, fits either side"; nothing for a part that has a badge of its own. */
  function sideText(call: CallView, item: ItemView): string {
    const side = t(`common.sideSign.${call.side}`)
    return item.category === 'implant' && item.side === 'either'
      ? t('dispatch.row.fitsEither', { side })
      : item.side === 'either'
        ? t('dispatch.row.caseSide', { side })
        : ''
  }

  function withWhom(item: ItemView, viewer: Viewer): string {
    const words = withWords(item, viewer)
    const role = item.acceptedBy?.role
    return t(words.key, { ...words.named, ...(role && { role: t(`common.roleShort.${role}`) }) })
  }

  function buttonText(action: ActionName, item: ItemView): string {
    if (action === 'pull' && item.unit === null) return t('dispatch.action.pullByTap')
    return t(`dispatch.action.${action as 'accept'}` satisfies TextKey)
  }

  function wordsOf(row: BoardRow, viewer: Viewer, nowMs: number, undoable: boolean): RowWords {
    const { call, item } = row
    const next = nextAction(call, item, viewer)
    const needed = neededWords(row, nowMs, time)
    return {
      name: nameOf(item),
      called: calledBy(call),
      kind: t(`dispatch.row.${call.kind}`),
      sideText: sideText(call, item),
      note: say(cordNote(row, nowMs, placeOf(call, item), time)),
      needed: say(needed),
      neededLong: isTime(needed) ? t('dispatch.row.needed', { when: say(needed) }) : say(needed),
      with: withWhom(item, viewer),
      action: next.action,
      actionText: next.action ? buttonText(next.action, item) : t(`dispatch.waitingFor.${next.waitingFor}`),
      tone: next.action ? toneOf(next.action) : 'plain',
      menu: menuFor(call, item, viewer, undoable).map((key) => ({
        key,
        text: buttonText(key, item),
        heavy: HEAVY.includes(key),
      })),
    }
  }

  return { wordsOf, placeOf, calledBy, sideText, say }
}
