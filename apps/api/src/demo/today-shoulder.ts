import type { DemoPlanLine } from './books.js'
import { WHO } from './people.js'
import type { Today } from './today.js'

const { juniper, pim, lotte, ifeoma, tobiah, jory, casimir, lindy } = WHO

const shoulderPlan = (
  head: [string, string, string],
  stem: [string, string, string],
  hint?: string,
): DemoPlanLine[] => [
  { kind: 'head', system: 'Sallowby', variant: 'concentric', planned: head[1], from: head[0], to: head[2] },
  {
    kind: 'stem',
    system: 'Sallowby',
    variant: 'press-fit',
    planned: stem[1],
    from: stem[0],
    to: stem[2],
    ...(hint !== undefined && { hint }),
  },
  { kind: 'glenoid', system: 'Sallowby', variant: 'pegged', planned: 'M', from: 'S', to: 'L' },
]

/** Room 2, 07:30: the quiet run, from early to implanted and signed out. */
function quietRun(day: Today): void {
  const of = day.case({
    number: '0412-1',
    room: 2,
    starts: '07:30',
    procedure: 'shoulderAnatomic',
    side: 'left',
    surgeon: juniper,
    scrub: pim,
    circulator: ifeoma,
    plan: shoulderPlan(['48', '50', '52'], ['8', '9', '10'], 'Other shoulder: stem 10'),
  })
  day.start(of, '07:06', '07:24', '07:27')
  day.trays(of, ['SLB-T1', 'SLB-T2'], '07:09', '07:22', '09:04')
  const ending = { open: ['08:44', ifeoma], done: ['08:53', ifeoma] } as const
  day.call(
    of,
    '07:52',
    { kind: 'early', inMinutes: 40, wanted: ['SLB-HD-50C'] },
    {
      readBack: ['07:53', ifeoma],
      accept: ['07:54', casimir],
      pull: ['07:58', casimir],
      deliver: ['08:02', jory],
      confirm: ['08:36', pim, 5],
      verify: ['08:39', ifeoma, pim],
      ...ending,
    },
  )
  day.call(
    of,
    '08:04',
    { kind: 'early', inMinutes: 30, wanted: ['SLB-ST-09'] },
    {
      readBack: ['08:05', ifeoma],
      accept: ['08:06', casimir],
      pull: ['08:11', casimir],
      deliver: ['08:15', jory],
      confirm: ['08:36:20', pim, 5],
      verify: ['08:39:30', ifeoma, pim],
      ...ending,
    },
  )
  day.call(
    of,
    '08:07',
    { kind: 'early', inMinutes: 15, wanted: ['SLB-GL-M-P', 'HBW-BC-40'] },
    {
      readBack: ['08:08', ifeoma],
      accept: ['08:09', lindy],
      pull: ['08:12', lindy],
      deliver: ['08:16', ifeoma],
      confirm: ['08:18', pim, 0],
      verify: ['08:19', ifeoma, pim, 'pin'],
      open: ['08:22', ifeoma],
      done: ['08:31', ifeoma],
    },
  )
  day.signOut(of, '09:21', '09:14')
}

/** Room 6, 10:00: under way; it is going to want the last eccentric 48. */
function roomSix(day: Today): void {
  const of = day.case({
    number: '0412-5',
    room: 6,
    starts: '10:00',
    procedure: 'shoulderAnatomic',
    side: 'right',
    surgeon: juniper,
    scrub: lotte,
    circulator: tobiah,
    plan: shoulderPlan(['46', '48', '50'], ['7', '8', '9']),
  })
  day.start(of, '09:38', '09:55', '09:58')
  day.trays(of, ['SLB-T1', 'SLB-T2'], '09:40', '09:53')
  day.call(
    of,
    '10:10',
    { kind: 'confirmed', inMinutes: 0, wanted: ['HBW-DB-32'], calledBy: lotte, enteredBy: lotte },
    {
      readBack: ['10:10:40', tobiah],
      accept: ['10:11', jory],
      pull: ['10:13', jory],
      deliver: ['10:15', jory],
      verify: ['10:16', tobiah],
      open: ['10:17', tobiah],
      done: ['10:24', tobiah],
    },
  )
  // In the room, to be verified.
  day.call(
    of,
    '10:22',
    { kind: 'early', inMinutes: 28, wanted: ['SLB-GL-M-K'] },
    {
      readBack: ['10:23', tobiah],
      accept: ['10:25', jory],
      pull: ['10:29', casimir],
      deliver: ['10:33', jory],
    },
  )
  day.call(
    of,
    '10:38',
    { kind: 'confirmed', inMinutes: 10, wanted: ['HBW-LH-1'], calledBy: lotte, enteredBy: tobiah },
    { accept: ['10:40', jory] },
  )
  // Waits to be read back and accepted.
  day.call(of, '10:41', { kind: 'early', inMinutes: 24, wanted: ['SLB-ST-08'] })
}

/** Room 2, 10:30: the second case, just begun. */
function roomTwo(day: Today): void {
  const of = day.case({
    number: '0412-6',
    room: 2,
    starts: '10:30',
    procedure: 'shoulderAnatomic',
    side: 'left',
    surgeon: juniper,
    scrub: pim,
    circulator: ifeoma,
    plan: shoulderPlan(['46', '48', '50'], ['4', '5', '6']),
  })
  day.start(of, '10:04', '10:25', '10:27')
  day.trays(of, ['SLB-T1', 'SLB-T2'], '10:07', '10:22')
  // In the hatch.
  day.call(
    of,
    '10:36',
    { kind: 'confirmed', inMinutes: 10, wanted: ['HBW-SU-5', 'HBW-SU-5'], calledBy: pim, enteredBy: pim },
    { readBack: ['10:36:30', ifeoma], accept: ['10:38', jory], pull: ['10:42', casimir] },
  )
  day.call(of, '10:43', { kind: 'early', inMinutes: 30, wanted: ['SLB-GL-M-P'] })
}

export function tellShoulders(day: Today): void {
  quietRun(day)
  roomSix(day)
  roomTwo(day)
}
