import type { CallView } from '@bellpull/contracts'
import { useClockStore } from '@/stores/clock'
import { useSessionStore } from '@/stores/session'
import { neededAs } from './times'
import { useText } from './useText'

/** What kind of call it is and when it is needed, as one says it at the table. */
export function useNeeded() {
  const clock = useClockStore()
  const session = useSessionStore()
  const { t } = useText()

  /** "Early, in 8 min", "Confirmed, needed 10:51", "Stand by". */
  function kindAndTime(call: Pick<CallView, 'kind' | 'neededAt'>): string {
    const kind = t(`common.kind.${call.kind}`)
    const said = neededAs(call.neededAt, clock.nowMs, session.house.zone)
    if (said.say === 'standby') return kind
    const time =
      said.say === 'now'
        ? t('common.time.now')
        : said.say === 'in'
          ? t('common.time.inMinutes', { n: said.minutes })
          : t('common.time.neededAt', { time: said.time })
    return t('room.last.kindAndTime', { kind, time })
  }

  return { kindAndTime }
}
