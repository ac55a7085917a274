import { product } from './catalogue.js'
import { WHO } from './people.js'
import type { DemoItem, DemoPlanLine } from './books.js'
import type { Today } from './today.js'

const { oswin, pim, lotte, ifeoma, wren, jory, casimir, lindy } = WHO

type Range = readonly [from: string, planned: string, to: string]

const line = (
  kind: DemoPlanLine['kind'],
  system: DemoPlanLine['system'],
  [from, planned, to]: Range,
  variant?: string,
): DemoPlanLine => ({
  kind,
  system,
  from,
  planned,
  to,
  ...(variant !== undefined && { variant }),
})

/** Room 3, 07:30: a liner that does not fit its shell is stopped before it is opened. */
function pairStopped(day: Today): void {
  const of = day.case({
    number: '0412-2',
    room: 3,
    starts: '07:30',
    procedure: 'hipTotal',
    side: 'right',
    surgeon: oswin,
    scrub: lotte,
    circulator: wren,
    plan: [
      line('shell', 'Cobnut', ['50', '52', '54']),
      line('liner', 'Cobnut', ['B32', 'C36', 'C36'], 'flat'),
      line('stem', 'Withyholt', ['6', '7', '8'], 'standard'),
      line('head', 'Withyholt', ['32 +0', '36 +0', '36 +4'], 'ceramic'),
    ],
  })
  day.start(of, '07:05', '07:23', '07:26')
  day.trays(of, ['WTH-T1', 'CBN-T1'], '07:08', '07:21', '09:02')
  day.call(
    of,
    '07:48',
    { kind: 'confirmed', inMinutes: 5, wanted: ['CBN-SH-50'] },
    {
      readBack: ['07:49', wren],
      accept: ['07:49:30', jory],
      pull: ['07:52', casimir],
      deliver: ['07:56', jory],
      verify: ['07:58', wren, lotte],
      open: ['08:00', wren],
      done: ['08:06', wren],
    },
  )
  const call = day.call(
    of,
    '08:04',
    { kind: 'confirmed', inMinutes: 5, wanted: ['CBN-LN-C36'] },
    {
      readBack: ['08:05', wren],
      accept: ['08:06', wren],
      pull: ['08:10', casimir],
      deliver: ['08:13', wren],
    },
  )
  const [wrong] = call.items as [DemoItem]
  day.at('08:14', (at) =>
    day.steps.refuse(wrong, at, wren, {
      problem: 'pair-mismatch',
      expected: { label: 'Liner', group: 'B' },
      scanned: { label: 'Liner C36', group: 'C' },
    }),
  )
  day.at('08:16', (at) => {
    const right = day.steps.change(wrong, at, lotte, product('CBN-LN-B32'), 'does not fit shell 50')
    day.go(call, [right], {
      accept: ['08:16:30', wren],
      pull: ['08:19', casimir],
      deliver: ['08:22', wren],
      verify: ['08:24', wren, lotte],
      open: ['08:25', wren],
      done: ['08:30', wren],
    })
  })
  day.at('08:41', (at) => day.steps.shelve(wrong, at, lindy))
  day.call(
    of,
    '08:20',
    { kind: 'early', inMinutes: 20, wanted: ['WTH-ST-07-S', 'WTH-HD-32-P0'] },
    {
      readBack: ['08:21', wren],
      accept: ['08:22', jory],
      pull: ['08:26', casimir],
      deliver: ['08:31', jory],
      confirm: ['08:38', lotte, 0],
      verify: ['08:40', wren, lotte],
      open: ['08:42', wren],
      done: ['08:52', wren],
    },
  )
  day.signOut(of, '09:20', '09:15')
}

/** Room 3, 09:50: holds the last sound shell 54. */
function roomThree(day: Today): void {
  const of = day.case({
    number: '0412-12',
    room: 3,
    starts: '10:00',
    procedure: 'hipTotal',
    side: 'left',
    surgeon: oswin,
    scrub: lotte,
    circulator: wren,
    plan: [
      line('shell', 'Cobnut', ['52', '54', '56']),
      line('liner', 'Cobnut', ['C36', 'C36', 'D36'], 'flat'),
      line('stem', 'Withyholt', ['6', '7', '8'], 'high offset'),
      line('head', 'Withyholt', ['36 -4', '36 +0', '36 +4'], 'ceramic'),
    ],
  })
  day.start(of, '09:40', '09:55', '09:57')
  day.trays(of, ['WTH-T1', 'CBN-T1'], '09:42', '09:54')
  day.call(
    of,
    '10:26',
    { kind: 'confirmed', inMinutes: 30, wanted: ['CBN-SH-54'] },
    { readBack: ['10:27', wren], accept: ['10:30', wren] },
  )
  day.call(
    of,
    '10:40',
    { kind: 'early', inMinutes: 25, wanted: ['CBN-LN-C36'] },
    { readBack: ['10:41', wren] },
  )
}

/** Room 5, 09:00: a revision that waits for a tray on loan, and lost the network for a while. */
function revision(day: Today): void {
  const of = day.case({
    number: '0412-4',
    room: 5,
    starts: '09:00',
    procedure: 'hipRevision',
    side: 'left',
    surgeon: oswin,
    scrub: pim,
    circulator: wren,
    plan: [
      line('shell', 'Cobnut', ['60', '62', '68']),
      line('liner', 'Cobnut', ['E36', 'E36', 'E40'], 'lipped'),
      {
        ...line('stem', 'Withyholt', ['2', '3', '5'], 'cemented'),
        hint: 'Extraction tray EXP-1 on loan: due Monday 12:00, not received at 07:10',
      },
      line('head', 'Withyholt', ['36 +0', '36 +4', '36 +8'], 'metal'),
    ],
  })
  // Nothing to hold: the tray has not come.
  day.call(of, '07:10', {
    kind: 'standby',
    inMinutes: null,
    wanted: ['EXP-1'],
    calledBy: pim,
    enteredBy: pim,
  })
  day.start(of, '08:36', '08:54', '08:57')
  day.call(
    of,
    '09:46',
    {
      kind: 'early',
      inMinutes: 15,
      wanted: ['CBN-SH-62'],
      data: { notSentSince: day.time.at('09:41').toISOString() },
    },
    {
      readBack: ['09:47', wren],
      accept: ['09:49', jory],
      pull: ['09:54', casimir],
      deliver: ['09:59', jory],
      confirm: ['10:05', pim, 0],
      verify: ['10:07', wren, pim],
      open: ['10:11', wren],
      done: ['10:19', wren],
    },
  )
  // Verified, and to be opened.
  day.call(
    of,
    '10:24',
    { kind: 'confirmed', inMinutes: 10, wanted: ['CBN-LN-E36-L'] },
    {
      readBack: ['10:25', wren],
      accept: ['10:26', wren],
      pull: ['10:31', lindy],
      deliver: ['10:35', wren],
      verify: ['10:39', wren, pim, 'pin'],
    },
  )
  // Early, and still on its shelf: an emergency may claim it.
  day.call(
    of,
    '10:30',
    { kind: 'early', inMinutes: 40, wanted: ['WTH-CM-03'] },
    { readBack: ['10:31', wren] },
  )
  day.call(
    of,
    '10:33',
    { kind: 'early', inMinutes: 35, wanted: ['HBW-BC-40H', 'HBW-BC-40H'], calledBy: pim, enteredBy: pim },
    { readBack: ['10:34', wren], accept: ['10:36', jory], pull: ['10:41', lindy] },
  )
}

/** Room 7: a hip under way without the shell it wants; the add-on of 13:20 comes after it. */
function roomSeven(day: Today): void {
  const team = { room: 7, side: 'right', surgeon: oswin, scrub: lotte, circulator: ifeoma } as const
  const of = day.case({
    ...team,
    number: '0412-11',
    starts: '09:10',
    procedure: 'hipTotal',
    plan: [
      line('shell', 'Cobnut', ['54', '56', '58']),
      line('liner', 'Cobnut', ['C36', 'D36', 'D36'], 'flat'),
      line('stem', 'Withyholt', ['5', '6', '7'], 'standard'),
      line('head', 'Withyholt', ['36 -4', '36 +0', '36 +4'], 'ceramic'),
    ],
  })
  day.start(of, '08:48', '09:04', '09:06')
  day.trays(of, ['WTH-T1', 'CBN-T1'], '08:50', '09:02')
  day.call(
    of,
    '09:40',
    { kind: 'early', inMinutes: 15, wanted: ['WTH-ST-06-S'] },
    {
      readBack: ['09:41', ifeoma],
      accept: ['09:42', jory],
      pull: ['09:46', casimir],
      deliver: ['09:51', jory],
      confirm: ['09:56', lotte, 0],
      verify: ['09:58', ifeoma, lotte],
      open: ['10:01', ifeoma],
      done: ['10:09', ifeoma],
    },
  )
  const liner = day.call(
    of,
    '10:12',
    { kind: 'early', inMinutes: 20, wanted: ['CBN-LN-D36'] },
    {
      readBack: ['10:13', ifeoma],
      accept: ['10:15', ifeoma],
      pull: ['10:20', lindy],
      deliver: ['10:24', ifeoma],
    },
  )
  // On its way back to its bin: the shell became a size that this liner does not fit.
  day.at('10:39', (at) => day.steps.putBack(liner.items, at, ifeoma, 'shell is going to be 54'))
  // None free: one is torn, room 3 holds the other.
  day.call(
    of,
    '10:40',
    { kind: 'early', inMinutes: 15, wanted: ['CBN-SH-54'] },
    { readBack: ['10:42', ifeoma] },
  )

  day.case({
    ...team,
    number: '0412-7',
    starts: '13:20',
    procedure: 'hipFracture',
    plan: [
      line('stem', 'Withyholt', ['2', '3', '4'], 'cemented'),
      line('head', 'Withyholt', ['28 +0', '28 +4', '32 +4'], 'metal'),
    ],
  })
}

export function tellHips(day: Today): void {
  pairStopped(day)
  roomThree(day)
  revision(day)
  roomSeven(day)
}
