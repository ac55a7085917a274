import { DateTime } from 'luxon'
import type { Books } from './books.js'
import { addCase } from './cases.js'
import { pastCase } from './past-cases.js'
import { WHO } from './people.js'
import { ROOM_NUMBERS } from './places.js'
import { Chance } from './random.js'
import { minutesAfter, type StoryTime } from './story-time.js'

/** Planned cases of the next days: what the house looks ahead to. */
export function planAhead(books: Books, time: StoryTime): void {
  for (let day = 1; day <= 3; day += 1) {
    const date = DateTime.fromISO(time.day(day), { zone: 'UTC' })
    let count = 0
    for (const room of ROOM_NUMBERS) {
      const chance = new Chance(`ahead:${day}:${room}`)
      let startsAt = time.on(day, '07:30')
      for (let n = chance.whole(1, 3); n > 0; n -= 1) {
        const told = pastCase(chance)
        count += 1
        addCase(books, {
          number: `${date.toFormat('yyooo')}-${count}`,
          room,
          startsAt,
          procedure: told.procedure,
          side: told.side,
          surgeon: told.surgeon,
          scrub: chance.pick([WHO.pim, WHO.lotte]),
          circulator: chance.pick([WHO.ifeoma, WHO.tobiah, WHO.wren]),
          plan: told.plan,
        })
        startsAt = minutesAfter(startsAt, Math.round((told.minutes + chance.whole(40, 60)) / 5) * 5)
      }
    }
  }
}
