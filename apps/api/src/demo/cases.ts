import type { Books, DemoCase, DemoPlanLine } from './books.js'
import { demoId } from './ids.js'
import type { DemoPerson } from './people.js'
import { StoryFault } from './rules.js'

export const PROCEDURES = {
  shoulderAnatomic: 'Shoulder, anatomic total',
  shoulderReverse: 'Shoulder, reverse',
  hipTotal: 'Hip, total',
  hipRevision: 'Hip, revision',
  hipFracture: 'Hip, add-on for fracture',
  kneeTotal: 'Knee, total',
} as const
export type ProcedureKind = keyof typeof PROCEDURES

export interface CaseDraft {
  readonly number: string
  readonly room: number
  readonly startsAt: Date
  readonly procedure: ProcedureKind
  readonly side: 'left' | 'right'
  readonly surgeon: DemoPerson
  readonly scrub: DemoPerson
  readonly circulator: DemoPerson
  readonly plan: readonly DemoPlanLine[]
}

export function addCase(books: Books, draft: CaseDraft): DemoCase {
  const { procedure, ...rest } = draft
  const added: DemoCase = {
    ...rest,
    id: demoId('case', draft.number),
    status: 'planned',
    procedure: { kind: procedure, label: PROCEDURES[procedure] },
    calls: [],
    linked: null,
    startedAt: null,
    timeOutAt: null,
    timeOutEndedAt: null,
    patientOutAt: null,
    closedAt: null,
    statusReason: null,
    version: 1,
  }
  books.cases.push(added)
  return added
}

export function startCase(books: Books, of: DemoCase, at: Date): void {
  Object.assign(of, { status: 'inProgress', startedAt: at })
  books.caseChanged(of, at, of.circulator, 'case.started')
}

export function timeOut(books: Books, of: DemoCase, at: Date, ended: boolean): void {
  if (ended) of.timeOutEndedAt = at
  else of.timeOutAt = at
  books.caseChanged(of, at, of.circulator, ended ? 'case.timeOutEnded' : 'case.timeOutStarted')
}

/** @throws {StoryFault} when something has no outcome yet. */
export function signOut(books: Books, of: DemoCase, at: Date, patientOutAt: Date | null): void {
  if (unsettled(of)) throw new StoryFault(`${of.number} is signed out with something unsettled`)
  Object.assign(of, { status: 'closed', closedAt: at, patientOutAt })
  books.caseChanged(of, at, of.circulator, 'case.signedOut', { patientOut: patientOutAt !== null })
}

export function cancelCase(books: Books, of: DemoCase, at: Date, by: DemoPerson, reason: string): void {
  Object.assign(of, { status: 'cancelled', statusReason: reason })
  books.caseChanged(of, at, by, 'case.cancelled', { reason })
}

export const unsettled = (of: DemoCase): boolean =>
  of.calls.some((call) => call.items.some((item) => item.outcome === null))
