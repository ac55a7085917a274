import { z } from 'zod'

/** Every way the API says no. The key is the stable name that clients switch on; one code has one status. */
export const PROBLEMS = {
  'malformed-body': { status: 400, title: 'The body could not be read' },
  'not-signed-in': { status: 401, title: 'Sign in first' },
  'wrong-credentials': { status: 401, title: 'E-mail or password is not right' },
  'not-permitted': { status: 403, title: 'Your role may not do this' },
  'not-found': { status: 404, title: 'There is nothing here by that name' },
  'body-too-large': { status: 413, title: 'The body is too large' },

  'in-progress': { status: 409, title: 'The first request with this key is still running' },
  'case-closed': { status: 409, title: 'The case is not open for this' },
  'case-moved-on': { status: 409, title: 'The case changed before this command arrived' },
  'call-moved-on': { status: 409, title: 'The call changed before this command arrived' },
  'item-moved-on': { status: 409, title: 'The item changed before this command arrived' },
  'not-settled': { status: 409, title: 'Something in this case has no outcome yet' },
  'patient-not-out': { status: 409, title: 'The patient is still in the room' },
  'own-call': { status: 409, title: 'Somebody else must read this call back' },
  'not-read-back': { status: 409, title: 'The call has not been read back' },
  'none-free': { status: 409, title: 'No package could be held' },
  'nothing-to-undo': { status: 409, title: 'There is no step of yours to take back' },
  'verify-again': { status: 409, title: 'Verified too long ago: scan it again' },
  'unit-held-elsewhere': { status: 409, title: 'This package is held for somebody else' },
  'not-the-pulled-unit': { status: 409, title: 'This is not the package that was pulled' },
  'wrong-item': { status: 409, title: 'The label is not what was called' },
  'label-differs': { status: 409, title: 'Label and record do not agree' },
  'unit-expired': { status: 409, title: 'The package is past its use-by date' },
  'unit-quarantined': { status: 409, title: 'The package is in quarantine' },
  'unit-recalled': { status: 409, title: 'The lot has been recalled' },
  'unit-not-sterile': { status: 409, title: 'The package is not sterile' },
  'unit-not-in-stock': { status: 409, title: 'The house has no such package in stock' },
  'wrong-side': { status: 409, title: 'The label is for the other side' },
  'pair-mismatch': { status: 409, title: 'The parts do not fit each other' },
  'second-checker-needed': { status: 409, title: 'A second person has to check' },
  'wrong-pin': { status: 409, title: 'The PIN is not right' },
  'not-as-heard': { status: 409, title: 'What was heard is not what is on the label' },
  'not-intact': { status: 409, title: 'The package must be dry, whole and sealed' },

  'idempotency-key-missing': { status: 422, title: 'An Idempotency-Key header is needed' },
  'idempotency-key-reused': { status: 422, title: 'The Idempotency-Key belongs to another request' },
  'invalid-input': { status: 422, title: 'The input does not match the contract' },
  'not-a-caller': { status: 422, title: 'This person may not call for the case' },
  'side-not-of-case': { status: 422, title: 'The side is not the side of the case' },
  'unknown-item': { status: 422, title: 'The catalogue has no such item' },
  'not-called-here': { status: 422, title: 'This is not asked for here' },
  'label-unreadable': { status: 422, title: 'The label could not be read' },

  'too-many-attempts': { status: 429, title: 'Too many attempts: wait and try again' },
  'too-many-requests': { status: 429, title: 'Too many requests: wait a moment' },
  unexpected: { status: 500, title: 'Something went wrong' },
  unavailable: { status: 503, title: 'The database is away' },
} as const satisfies Record<string, { status: number; title: string }>

export type ProblemCode = keyof typeof PROBLEMS

export const problemType = (code: ProblemCode): string => `urn:bellpull:problem:${code}`

/** The code of a problem's `type`, or `null` when this client does not know it. */
export function problemCode(type: string): ProblemCode | null {
  const code = type.replace(/^urn:bellpull:problem:/, '')
  return Object.hasOwn(PROBLEMS, code) ? (code as ProblemCode) : null
}

/** RFC 9457 problem details. Members beyond these depend on the code (`expected`, `scanned`, `reason`, ...). */
export const problemDetails = z
  .looseObject({
    type: z.string(),
    title: z.string(),
    status: z.int(),
    detail: z.string().optional(),
    instance: z.string(),
    errors: z.array(z.object({ pointer: z.string(), message: z.string() })).optional(),
  })
  .meta({ id: 'Problem' })
export type ProblemDetails = z.infer<typeof problemDetails>
