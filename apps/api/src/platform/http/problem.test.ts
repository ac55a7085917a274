import { describe, expect, it } from 'vitest'
import pg from 'pg'
import { QueryFailedError } from 'typeorm'
import { DatabaseAway } from '../db/sql.js'
import { Problem, problemBody, toProblem } from './problem.js'

function fault(code: string, constraint?: string): pg.DatabaseError {
  const error = new pg.DatabaseError('words that nobody reads', 1, 'error')
  error.code = code
  if (constraint !== undefined) error.constraint = constraint
  return error
}
const coded = (code: string): Error => Object.assign(new Error('words'), { code })

describe('what was thrown becomes', () => {
  it.each([
    ['a lost connection', new DatabaseAway(new Error('gone')), 'unavailable'],
    ['a refused connection', coded('ECONNREFUSED'), 'unavailable'],
    ['a server that shuts down', fault('57P01'), 'unavailable'],
    ['a server that starts', fault('57P03'), 'unavailable'],
    ['the same by way of the ORM', new QueryFailedError('', [], fault('57P01')), 'unavailable'],
    ['a connection lost under the ORM', new QueryFailedError('', [], new Error('gone')), 'unavailable'],
    ['a statement that took too long', fault('57014'), 'unavailable'],
    ['a second hold of one package', fault('23505', 'unit_held_once'), 'unit-held-elsewhere'],
    [
      'the same by way of the ORM',
      new QueryFailedError('', [], fault('23505', 'item_unit_one_open')),
      'unit-held-elsewhere',
    ],
    ['a read-back by the caller', fault('23514', 'call_read_back_by_another'), 'own-call'],
    ['another broken promise', fault('23505', 'room_number_once'), 'unexpected'],
    ['a NUL in a text', fault('22021'), 'invalid-input'],
    ['a number out of range', fault('22003'), 'invalid-input'],
    ['a path without sense', new URIError('words'), 'not-found'],
    ['anything else', new TypeError('words'), 'unexpected'],
    ['no error at all', 'words', 'unexpected'],
    [
      'an error that calls itself too large',
      Object.assign(new Error(''), { type: 'entity.too.large', status: 413 }),
      'body-too-large',
    ],
    [
      'a body in an unknown encoding',
      Object.assign(new Error(''), { type: 'encoding.unsupported', status: 415 }),
      'malformed-body',
    ],
  ])('%s: %s', (_what, thrown, code) => {
    expect(toProblem(thrown).code).toBe(code)
  })

  it('itself, when it is a problem', () => {
    const problem = new Problem('none-free')
    expect(toProblem(problem)).toBe(problem)
  })
})

describe('the body of a problem', () => {
  it('carries further members, which never hide the fixed ones', () => {
    const problem = new Problem('wrong-item', {
      detail: 'Another size.',
      extra: { expected: '50', scanned: '48', status: 200, type: 'x' },
    })
    expect(problemBody(problem, '/api/v1/items/1/commands')).toEqual({
      type: 'urn:bellpull:problem:wrong-item',
      title: 'The label is not what was called',
      status: 409,
      detail: 'Another size.',
      instance: '/api/v1/items/1/commands',
      expected: '50',
      scanned: '48',
    })
  })
})
