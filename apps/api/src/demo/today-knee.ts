import type { DemoItem, DemoPlanLine } from './books.js'
import { WHO } from './people.js'
import type { Today } from './today.js'

const { marisol, pim, lotte, ifeoma, tobiah, wren, jory, casimir, lindy } = WHO

const kneePlan = (femur: number, tray: number, insert: string, type: 'CR' | 'PS'): DemoPlanLine[] => {
  const around = (size: number) => ({
    from: String(size - 1),
    planned: String(size),
    to: String(size + 1),
  })
  return [
    { kind: 'femur', system: 'Dunnock', variant: type, ...around(femur) },
    { kind: 'tibia', system: 'Dunnock', ...around(tray) },
    { kind: 'insert', system: 'Dunnock', variant: type, planned: insert },
    { kind: 'patella', system: 'Dunnock', from: '29', planned: '32', to: '35' },
  ]
}

/** Room 1: everything still on its way. */
function roomOne(day: Today): void {
  const of = day.case({
    number: '0412-8',
    room: 1,
    starts: '09:55',
    procedure: 'kneeTotal',
    side: 'left',
    surgeon: marisol,
    scrub: lotte,
    circulator: tobiah,
    plan: kneePlan(5, 4, 'G2 10', 'CR'),
  })
  day.start(of, '09:34', '09:50', '09:52')
  day.trays(of, ['DNK-T1', 'DNK-T2'], '09:36', '09:49')
  // Two parts in the room, to be verified together.
  day.call(
    of,
    '10:20',
    { kind: 'early', inMinutes: 25, wanted: ['DNK-FM-05-CR-L', 'DNK-TB-04'] },
    {
      readBack: ['10:21', tobiah],
      accept: ['10:23', lindy],
      pull: ['10:28', lindy],
      deliver: ['10:32', jory],
    },
  )
  // Held from the lot that is going to be recalled, and still in its bin.
  day.call(
    of,
    '10:34',
    { kind: 'early', inMinutes: 25, wanted: ['DNK-IN-G2-10-CR'] },
    { readBack: ['10:35', tobiah], accept: ['10:38', lindy] },
  )
  day.call(of, '10:43', {
    kind: 'early',
    inMinutes: 20,
    wanted: ['HBW-BC-40', 'HBW-BC-40'],
    enteredBy: tobiah,
  })
}

/** Room 4: both knees, left first. A right femur for the left knee is stopped; the circulator is relieved. */
function bothKnees(day: Today): void {
  const team = { room: 4, procedure: 'kneeTotal', surgeon: marisol, scrub: lotte } as const
  const left = day.case({
    ...team,
    number: '0412-3',
    starts: '08:00',
    side: 'left',
    circulator: tobiah,
    plan: kneePlan(5, 4, 'G2 10', 'CR'),
  })
  const right = day.case({
    ...team,
    number: '0412-10',
    starts: '09:40',
    side: 'right',
    circulator: wren,
    plan: kneePlan(5, 4, 'G2 9', 'CR'),
  })
  left.linked = right
  right.linked = left

  day.start(left, '07:36', '07:54', '07:57')
  day.trays(left, ['DNK-T1', 'DNK-T2'], '07:39', '07:52', '09:24')
  const parts = day.call(
    left,
    '08:22',
    { kind: 'early', inMinutes: 25, wanted: ['DNK-FM-05-CR-L', 'DNK-TB-04'] },
    {
      readBack: ['08:23', tobiah],
      accept: ['08:25', casimir],
      pull: ['08:31', casimir],
      deliver: ['08:37', tobiah],
      confirm: ['08:40', lotte, 5],
      verify: ['08:49', tobiah, lotte],
      open: ['08:53', tobiah],
      done: ['09:08', tobiah],
    },
  )
  const [femur] = parts.items as [DemoItem]
  day.at('08:41', (at) =>
    day.steps.refuse(femur, at, tobiah, {
      problem: 'wrong-side',
      expected: { ref: 'DNK-FM-05-CR-L', label: 'Femur 5', variant: 'CR', side: 'left' },
      scanned: { ref: 'DNK-FM-05-CR-R', label: 'Femur 5', variant: 'CR', side: 'right' },
    }),
  )
  day.call(
    left,
    '08:44',
    {
      kind: 'early',
      inMinutes: 15,
      wanted: ['HBW-BC-40', 'HBW-BC-40', 'HBW-MX-1'],
      calledBy: lotte,
      enteredBy: lotte,
    },
    {
      readBack: ['08:45', tobiah],
      accept: ['08:46', lindy],
      pull: ['08:49:30', lindy],
      deliver: ['08:52', tobiah],
      verify: ['08:54', tobiah],
      open: ['08:56', tobiah],
      done: ['09:08:30', tobiah],
    },
  )
  // From the lot that is going to be recalled.
  day.call(
    left,
    '08:55',
    { kind: 'confirmed', inMinutes: 5, wanted: ['DNK-IN-G2-10-CR', 'DNK-PT-32'] },
    {
      readBack: ['08:55:40', tobiah],
      accept: ['08:56:30', casimir],
      pull: ['08:59', casimir],
      deliver: ['09:02', tobiah],
      verify: ['09:04', tobiah, lotte],
      open: ['09:06', tobiah],
      done: ['09:15', tobiah],
    },
  )
  day.signOut(left, '09:32', null)

  const next = day.call(
    right,
    '09:20',
    { kind: 'early', inMinutes: 50, wanted: ['DNK-FM-05-CR-R', 'DNK-TB-04'] },
    {
      readBack: ['09:21', tobiah],
      accept: ['09:24', tobiah],
      pull: ['09:37', casimir],
      deliver: ['09:43', wren],
      confirm: ['10:10', lotte, 5],
      verify: ['10:13', wren, lotte],
      open: ['10:18', wren],
      done: ['10:31', wren],
    },
  )
  day.at('09:30', (at) => day.steps.handOver(next.items, at, tobiah, wren))
  day.at('09:31', (at) => day.steps.take(next.items, at, wren))
  day.start(right, '09:35', '09:46', '09:48')
  day.trays(right, ['DNK-T1', 'DNK-T2'], '09:36', '09:47')
  day.call(
    right,
    '10:18',
    { kind: 'early', inMinutes: 20, wanted: ['DNK-PT-32'] },
    {
      readBack: ['10:19', wren],
      accept: ['10:20', jory],
      pull: ['10:24', casimir],
      deliver: ['10:29', jory],
      confirm: ['10:36', lotte, 10],
      verify: ['10:40', wren, lotte],
    },
  )
  day.call(
    right,
    '10:33',
    { kind: 'confirmed', inMinutes: 5, wanted: ['DNK-IN-G2-09-CR'] },
    { readBack: ['10:34', wren], accept: ['10:35', wren], pull: ['10:38', lindy], deliver: ['10:42', wren] },
  )
}

/** Room 8: nearly done; one part is open on the table. */
function roomEight(day: Today): void {
  const of = day.case({
    number: '0412-9',
    room: 8,
    starts: '09:30',
    procedure: 'kneeTotal',
    side: 'right',
    surgeon: marisol,
    scrub: pim,
    circulator: ifeoma,
    plan: kneePlan(6, 5, 'G2 11', 'PS'),
  })
  day.start(of, '09:08', '09:24', '09:26')
  day.trays(of, ['DNK-T1'], '09:10', '09:22')
  day.call(
    of,
    '09:52',
    { kind: 'early', inMinutes: 30, wanted: ['DNK-FM-06-PS-R', 'DNK-TB-05'] },
    {
      readBack: ['09:53', ifeoma],
      accept: ['09:55', jory],
      pull: ['10:01', lindy],
      deliver: ['10:06', jory],
      confirm: ['10:16', pim, 5],
      verify: ['10:20', ifeoma, pim],
      open: ['10:24', ifeoma],
      done: ['10:36', ifeoma],
    },
  )
  day.call(
    of,
    '10:21',
    { kind: 'confirmed', inMinutes: 10, wanted: ['DNK-IN-G2-11-PS'] },
    {
      readBack: ['10:22', ifeoma],
      accept: ['10:23', jory],
      pull: ['10:27', casimir],
      deliver: ['10:31', jory],
      verify: ['10:34', ifeoma, pim, 'pin'],
      open: ['10:40', ifeoma],
    },
  )
  day.call(
    of,
    '10:37',
    {
      kind: 'confirmed',
      inMinutes: 10,
      wanted: [{ text: 'Second long retractor' }],
      calledBy: pim,
      enteredBy: ifeoma,
    },
    { accept: ['10:39', jory] },
  )
}

export function tellKnees(day: Today): void {
  roomOne(day)
  bothKnees(day)
  roomEight(day)
}
