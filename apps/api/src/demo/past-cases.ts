import type { DemoPlanLine } from './books.js'
import type { ProcedureKind } from './cases.js'
import { two } from './listed.js'
import { WHO, type DemoPerson } from './people.js'
import type { Chance } from './random.js'

/** A call that a case of that kind makes, by the time of its course. */
export interface PastCall {
  /** Minutes from the start of the case. */
  readonly atMinute: number
  readonly kind: 'early' | 'confirmed' | 'standby'
  readonly inMinutes: number | null
  readonly refs: readonly string[]
  readonly text?: string
  /** For early and stand by: minutes from the start of the case at which it is confirmed. */
  readonly confirmedAt?: number
  /** On stand by the last of these is what is wanted in the end. */
  readonly byScrub?: boolean
}

export interface PastCase {
  readonly procedure: ProcedureKind
  readonly surgeon: DemoPerson
  readonly side: 'left' | 'right'
  readonly minutes: number
  readonly plan: readonly DemoPlanLine[]
  readonly calls: readonly PastCall[]
}

/**
 * How far what was needed lay from what was planned, in sizes. Shoulder stems were exact in 44 % and within one
 * size in 88 % of 129 (stem size prediction with 3D planning, 2023); the rest of the shares is invented.
 */
const OFF_PLAN = [
  [0, 44],
  [-1, 22],
  [1, 22],
  [-2, 6],
  [2, 6],
] as const

const within = (value: number, low: number, high: number): number => Math.min(high, Math.max(low, value))

/** Sizes cluster about the middle of the range. */
const middling = (chance: Chance, low: number, high: number): number =>
  Math.round((chance.whole(low, high) + chance.whole(low, high) + chance.whole(low, high)) / 3)

export function pastCase(chance: Chance): PastCase {
  const side = chance.hits(0.5) ? 'left' : 'right'
  const kind = chance.weighted([
    ['shoulder', 30],
    ['hip', 34],
    ['knee', 36],
  ] as const)
  const tell = { shoulder, hip, knee }[kind]
  const told = tell(chance, side)
  return { ...told, side, calls: [...told.calls, ...extras(chance, told.minutes)] }
}

type Told = Omit<PastCase, 'side'>

function shoulder(chance: Chance): Told {
  const planned = middling(chance, 0, 9)
  const head = 38 + 2 * within(planned + chance.weighted(OFF_PLAN), 0, 9)
  const stemPlanned = middling(chance, 2, 11)
  const stem = within(stemPlanned + chance.weighted(OFF_PLAN), 1, 12)
  const glenoid = chance.pick(['S', 'M', 'M', 'M', 'L', 'XL'])
  const pegged = chance.hits(0.65)
  const letter = chance.hits(0.3) ? 'E' : 'C'
  const around = (size: number, step: number) => ({
    from: String(size - step),
    planned: String(size),
    to: String(size + step),
  })
  const calls: PastCall[] = [
    { atMinute: 30, kind: 'early', inMinutes: 35, refs: [`SLB-ST-${two(stem)}`], confirmedAt: 66 },
    {
      atMinute: 42,
      kind: 'confirmed',
      inMinutes: 5,
      refs: [`SLB-GL-${glenoid}-${pegged ? 'P' : 'K'}`, ...(pegged ? ['HBW-BC-40'] : [])],
    },
  ]
  const headRef = (size: number) => `SLB-HD-${within(size, 38, 56)}${letter}`
  if (chance.hits(0.12))
    calls.push({
      atMinute: 22,
      kind: 'standby',
      inMinutes: null,
      refs: [headRef(head === 38 ? 40 : head - 2), headRef(head)],
      confirmedAt: 65,
    })
  else calls.push({ atMinute: 22, kind: 'early', inMinutes: 40, refs: [headRef(head)], confirmedAt: 65 })
  return {
    procedure: 'shoulderAnatomic',
    surgeon: WHO.juniper,
    minutes: 96,
    plan: [
      { kind: 'head', system: 'Sallowby', variant: 'concentric', ...around(38 + 2 * planned, 2) },
      { kind: 'stem', system: 'Sallowby', variant: 'press-fit', ...around(stemPlanned, 1) },
      { kind: 'glenoid', system: 'Sallowby', planned: glenoid },
    ],
    calls,
  }
}

const groupOfShell = (size: number): string =>
  size <= 46 ? 'A' : size <= 50 ? 'B' : size <= 54 ? 'C' : size <= 58 ? 'D' : 'E'
const INNER = { A: [28], B: [28, 32], C: [32, 36], D: [32, 36, 40], E: [36, 40] } as const

function hip(chance: Chance): Told {
  const planned = 44 + 2 * middling(chance, 0, 12)
  const shell = within(planned + 2 * chance.weighted(OFF_PLAN), 44, 68)
  const group = groupOfShell(shell) as keyof typeof INNER
  const inner = chance.pick(INNER[group])
  const stemPlanned = middling(chance, 2, 11)
  const stem = within(stemPlanned + chance.weighted(OFF_PLAN), 1, 12)
  const cemented = chance.hits(0.2)
  const neck = chance.pick(inner === 28 ? ['P0', 'P4'] : ['M4', 'P0', 'P0', 'P4', 'P8'])
  const stemRef = cemented
    ? `WTH-CM-${two(within(stem, 1, 6))}`
    : `WTH-ST-${two(stem)}-${chance.hits(0.4) ? 'H' : 'S'}`
  return {
    procedure: 'hipTotal',
    surgeon: WHO.oswin,
    minutes: 84,
    plan: [
      {
        kind: 'shell',
        system: 'Cobnut',
        planned: String(planned),
        from: String(within(planned - 2, 44, 68)),
        to: String(within(planned + 2, 44, 68)),
      },
      { kind: 'stem', system: 'Withyholt', planned: String(stemPlanned) },
      { kind: 'head', system: 'Withyholt', planned: '36 +0' },
    ],
    calls: [
      { atMinute: 24, kind: 'confirmed', inMinutes: 5, refs: [`CBN-SH-${shell}`] },
      {
        atMinute: 30,
        kind: 'early',
        inMinutes: 10,
        refs: [`CBN-LN-${group}${inner}${chance.hits(0.25) ? '-L' : ''}`],
        confirmedAt: 38,
      },
      {
        atMinute: 40,
        kind: 'early',
        inMinutes: 20,
        refs: [stemRef, ...(cemented ? ['HBW-BC-40H', 'HBW-BC-40H', 'HBW-MX-1'] : [])],
        confirmedAt: 55,
      },
      {
        atMinute: 60,
        kind: 'confirmed',
        inMinutes: 0,
        refs: [`WTH-HD-${inner}-${neck}${chance.hits(0.3) ? '-M' : ''}`],
      },
    ],
  }
}

function knee(chance: Chance, side: 'left' | 'right'): Told {
  const planned = middling(chance, 2, 9)
  const femur = within(planned + chance.weighted(OFF_PLAN), 1, 10)
  const tray = within(femur + chance.whole(-1, 0), 1, 9)
  const type = chance.hits(0.55) ? 'CR' : 'PS'
  const narrow = femur >= 3 && femur <= 7 && chance.hits(0.25) ? 'N' : ''
  const thickness = chance.pick([8, 9, 9, 10, 10, 10, 11, 12, 14])
  return {
    procedure: 'kneeTotal',
    surgeon: WHO.marisol,
    minutes: 80,
    plan: [
      {
        kind: 'femur',
        system: 'Dunnock',
        variant: type,
        planned: String(planned),
        from: String(within(planned - 1, 1, 10)),
        to: String(within(planned + 1, 1, 10)),
      },
      { kind: 'tibia', system: 'Dunnock', planned: String(tray) },
      { kind: 'insert', system: 'Dunnock', variant: type },
    ],
    calls: [
      {
        atMinute: 24,
        kind: 'early',
        inMinutes: 25,
        refs: [`DNK-FM-${two(femur)}-${type}${narrow}-${side === 'left' ? 'L' : 'R'}`, `DNK-TB-${two(tray)}`],
        confirmedAt: 44,
      },
      {
        atMinute: 32,
        kind: 'early',
        inMinutes: 15,
        refs: ['HBW-BC-40', 'HBW-BC-40'],
        confirmedAt: 42,
        byScrub: true,
      },
      {
        atMinute: 50,
        kind: 'confirmed',
        inMinutes: chance.hits(0.6) ? 0 : 5,
        refs: [
          `DNK-IN-G${Math.ceil(tray / 3)}-${two(thickness)}-${type}`,
          ...(chance.hits(0.5) ? [`DNK-PT-${chance.pick([26, 29, 32, 32, 35, 38])}`] : []),
        ],
      },
    ],
  }
}

const SUPPLIES = [
  'HBW-DB-32',
  'HBW-DB-25',
  'HBW-SU-1',
  'HBW-SU-20',
  'HBW-SU-5',
  'HBW-SB-90',
  'HBW-LH-1',
  'HBW-ST-1',
]
const IN_WORDS = [
  'Second long retractor',
  'Step for the table',
  'Large drape',
  'Other shoulder holder',
  'Longer cord',
]

function extras(chance: Chance, minutes: number): PastCall[] {
  const calls: PastCall[] = []
  if (chance.hits(0.45))
    calls.push({
      atMinute: chance.whole(8, 18),
      kind: 'confirmed',
      inMinutes: chance.hits(0.5) ? 0 : 10,
      refs: [chance.pick(SUPPLIES), ...(chance.hits(0.3) ? [chance.pick(SUPPLIES)] : [])],
      byScrub: true,
    })
  if (chance.hits(0.1))
    calls.push({
      atMinute: chance.whole(12, minutes - 40),
      kind: 'confirmed',
      inMinutes: 5,
      refs: [],
      text: chance.pick(IN_WORDS),
      byScrub: true,
    })
  return calls
}
