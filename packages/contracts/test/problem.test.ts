import { UNUSABLE_REASONS } from '@bellpull/domain'
import { describe, expect, test } from 'vitest'
import { PROBLEMS, problemCode, problemDetails, problemType, type ProblemCode } from '../src/index.js'

/** Every refusal that clients were promised, with its status. */
const PROMISED = `
  400 malformed-body
  401 not-signed-in wrong-credentials
  403 not-permitted
  404 not-found
  409 in-progress case-closed call-moved-on item-moved-on own-call not-read-back none-free not-settled verify-again
      unit-held-elsewhere not-the-pulled-unit wrong-item label-differs unit-expired unit-quarantined unit-recalled
      unit-not-sterile unit-not-in-stock wrong-side pair-mismatch second-checker-needed wrong-pin not-as-heard not-intact
  413 body-too-large
  422 idempotency-key-missing idempotency-key-reused invalid-input not-a-caller side-not-of-case unknown-item label-unreadable
  429 too-many-attempts too-many-requests
`
let status = 0
const promised = PROMISED.trim()
  .split(/\s+/)
  .flatMap((word) => {
    if (/^\d+$/.test(word)) status = Number(word)
    return /^\d+$/.test(word) ? [] : [{ code: word as ProblemCode, status }]
  })

describe('the ways in which the API says no', () => {
  test.each(promised)('$code has status $status', ({ code, status: wanted }) => {
    expect(PROBLEMS[code].status).toBe(wanted)
  })

  test('each has a title of its own and a status that is a refusal or a failure', () => {
    const all = Object.values(PROBLEMS)
    expect(new Set(all.map(({ title }) => title)).size).toBe(all.length)
    expect(all.every((one) => one.status >= 400 && one.status < 600)).toBe(true)
  })

  test('a type names its code, and only a known one', () => {
    for (const code of Object.keys(PROBLEMS) as ProblemCode[])
      expect(problemCode(problemType(code))).toBe(code)
    expect(problemType('none-free')).toBe('urn:bellpull:problem:none-free')
    expect(problemCode('urn:bellpull:problem:never-heard-of')).toBeNull()
    expect(problemCode('about:blank')).toBeNull()
    expect(problemCode('urn:bellpull:problem:toString')).toBeNull()
  })

  test('whatever keeps a package from being used has a code of the same name', () => {
    expect(UNUSABLE_REASONS.filter((reason) => !(reason in PROBLEMS))).toEqual([])
  })

  test('a body may have members that this client does not know', () => {
    const body = {
      type: problemType('wrong-item'),
      title: 't',
      status: 409,
      instance: '/x',
      expected: { ref: 'A' },
    }
    expect(problemDetails.parse(JSON.parse(JSON.stringify(body)))).toEqual(body)
    expect(problemDetails.safeParse({ ...body, status: undefined }).success).toBe(false)
  })
})
