import { useClockStore } from '@/stores/clock'
import { useSessionStore } from '@/stores/session'
import { ageAs, dayOfInstant, dayText, neededAs, timeOfDay } from './times'
import { useText } from './useText'

/** Times in words, in the house's zone; those that are relative tick with the clock. */
export function useTimes() {
  const clock = useClockStore()
  const session = useSessionStore()
  const { t } = useText()

  /** "10:52" */
  const time = (instant: string | number): string => timeOfDay(instant, session.house.zone)
  /** "31 Mar 2034", of an instant in the house's zone. */
  const date = (instant: string | number): string => dayOfInstant(instant, session.house.zone)
  /** "31 Mar 2034", of a day `YYYY-MM-DD`. */
  const day = (on: string): string => dayText(on)

  /** "12 s", "3 min", "2 h" */
  function age(ms: number): string {
    const { unit, n } = ageAs(ms)
    return t(`common.age.${unit}`, { n })
  }

  /** "1 min ago", "just now" */
  function ago(instant: string): string {
    const minutes = Math.floor((clock.nowMs - Date.parse(instant)) / 60_000)
    return minutes < 1 ? t('common.time.justNow') : t('common.time.minutesAgo', { n: minutes })
  }

  /** "in 3 min", "11:02", "now", "stand by", "needed 10:51" */
  function needed(call: { neededAt: string | null }): string {
    const said = neededAs(call.neededAt, clock.nowMs, session.house.zone)
    switch (said.say) {
      case 'standby':
        return t('common.time.standby')
      case 'now':
        return t('common.time.now')
      case 'in':
        return t('common.time.inMinutes', { n: said.minutes })
      case 'at':
        return said.time
      case 'passed':
        return t('common.time.neededAt', { time: said.time })
    }
  }

  return { time, date, day, age, ago, needed }
}
