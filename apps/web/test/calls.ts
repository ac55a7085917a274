import type { CallView, ItemView, PersonRef } from '@bellpull/contracts'

/** Calls and items for tests: a left shoulder in room 3, called at 10:40 for 11:02. */

const uuid = (n: number): string => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`
let made = 0
const nextId = (): string => uuid((made += 1))

export const person = (name: string, role: PersonRef['role']): PersonRef => ({
  id: uuid(900_000 + [...name].reduce((sum, letter) => sum + letter.charCodeAt(0), 0)),
  name,
  initials: name
    .split(' ')
    .map((word) => word[0])
    .join(''),
  role,
})

export const JUNIPER = person('Juniper Hathersedge', 'surgeon')
export const PIM = person('Pim Ottershaw', 'scrub')
export const IFEOMA = person('Ifeoma Brindlecombe', 'circulator')
export const TOBIAH = person('Tobiah Luskett', 'circulator')
export const JORY = person('Jory Penhallick', 'runner')
export const CASIMIR = person('Casimir Dolebrook', 'core')
export const MAGDA = person('Magda Fairweatherly', 'charge')

export const CALLED_AT = '2026-06-02T10:40:00.000Z'
export const NEEDED_AT = '2026-06-02T11:02:00.000Z'
export const at = (time: string): number => Date.parse(`2026-06-02T${time}:00.000Z`)
export const instant = (time: string): string => `2026-06-02T${time}:00.000Z`

type Unit = NonNullable<ItemView['unit']>

export const unit = (over: Partial<Unit> & { code?: string; zone?: string } = {}): Unit => {
  const { code = 'A1-7', zone = 'core', ...rest } = over
  return {
    id: nextId(),
    gtin: '09521100100489',
    lot: 'L26A014',
    serial: null,
    useByOn: '2028-11-30',
    location: { id: nextId(), code, zone },
    ...rest,
  }
}

export function item(over: Partial<ItemView> = {}): ItemView {
  return {
    id: nextId(),
    callId: uuid(0),
    catalogueItemId: uuid(500),
    category: 'implant',
    ref: 'SLB-HD-50C',
    label: 'Head 50',
    variant: 'concentric',
    side: 'either',
    stage: 'called',
    outcome: null,
    hold: 'held',
    unit: over.hold === 'noneFree' || over.hold === 'notStocked' ? null : unit(),
    alternatives: [],
    heldBy: [],
    pairs: [],
    acceptedBy: null,
    offeredTo: null,
    openedUnverified: false,
    version: 1,
    kind: 'head',
    partName: 'Humeral head',
    size: '50',
    system: 'Sallowby',
    acceptedAt: null,
    pulledAt: null,
    inRoomAt: null,
    verifiedAt: null,
    openedAt: null,
    settledAt: null,
    typed: false,
    reason: null,
    putBack: null,
    walkOrder: 70,
    replacesItemId: null,
    ...over,
  }
}

export function call(items: ItemView[], over: Partial<CallView> & { number?: number } = {}): CallView {
  const { number = 3, ...rest } = over
  const id = nextId()
  return {
    id,
    caseId: uuid(700 + number),
    room: { id: uuid(600 + number), number },
    kind: 'confirmed',
    neededAt: NEEDED_AT,
    calledAt: CALLED_AT,
    calledBy: JUNIPER,
    enteredBy: PIM,
    readBack: { by: IFEOMA, at: CALLED_AT },
    version: 1,
    items: items.map((one) => ({ ...one, callId: id })),
    caseNumber: '0412-5',
    side: 'left',
    confirmedAt: null,
    revision: 1,
    open: true,
    ...rest,
  }
}
