import { makeCall, signIn, typedLabel } from '@bellpull/contracts'
import { describe, expect, it } from 'vitest'
import { z } from 'zod'
import { parse } from './parse.js'
import type { Problem } from './problem.js'

const refusal = (schema: z.ZodType, input: unknown, where: 'path' | 'query' | 'body'): Problem => {
  try {
    parse(schema, input, where)
  } catch (error) {
    return error as Problem
  }
  throw new Error('was taken')
}
const errors = (schema: z.ZodType, input: unknown) => refusal(schema, input, 'body').options.errors

const call = {
  kind: 'early',
  neededInMinutes: 10,
  calledBy: '7b0c9c1e-0000-4000-8000-000000000001',
  side: 'left',
  items: [{ catalogueItemId: '7b0c9c1e-0000-4000-8000-000000000002', quantity: 1 }],
}

describe('parse', () => {
  it('gives back what the contract makes of the input', () => {
    expect(parse(signIn, { email: ' a@b.example ', password: 'x' }, 'body')).toEqual({
      email: 'a@b.example',
      password: 'x',
    })
    expect(parse(makeCall, call, 'body')).toEqual(call)
  })

  it.each([
    [
      'nothing at all',
      signIn,
      undefined,
      [
        ['/email', 'is missing'],
        ['/password', 'is missing'],
      ],
    ],
    [
      'an unknown member',
      signIn,
      { email: 'abc', password: 'x', 'a/b~c': 1 },
      [['/a~1b~0c', 'is not known here']],
    ],
    ['a wrong kind', signIn, { email: 5, password: 'x' }, [['/email', 'must be a text']]],
    ['a list', signIn, [], [['', 'must be an object']]],
    [
      'too long a text',
      signIn,
      { email: 'a'.repeat(255), password: 'x' },
      [['/email', 'must be at most 254 characters long']],
    ],
    [
      'a quantity of ten, in words about the nearest alternative only',
      makeCall,
      { ...call, items: [{ ...call.items[0], quantity: 10 }] },
      [['/items/0/quantity', 'must be at most 9']],
    ],
    [
      'half a piece',
      makeCall,
      { ...call, items: [{ ...call.items[0], quantity: 1.5 }] },
      [['/items/0/quantity', 'must be a whole number']],
    ],
    [
      'an id that is none',
      makeCall,
      { ...call, calledBy: 'juniper' },
      [['/calledBy', 'must be an id (UUID)']],
    ],
    ['no items', makeCall, { ...call, items: [] }, [['/items', 'must be at least 1 long']]],
    ['a side that is none', makeCall, { ...call, side: 'up' }, [['/side', 'must be left or right']]],
    [
      'a rule of the contract',
      makeCall,
      { ...call, kind: 'standby' },
      [['/neededInMinutes', 'Stand by has no time; every other kind has one']],
    ],
    [
      'no such day',
      typedLabel,
      { ref: 'R', lot: 'L', useByOn: '2027-02-30' },
      [['/useByOn', 'must be a day, YYYY-MM-DD']],
    ],
  ] as const)('%s', (_what, schema, input, expected) => {
    expect(errors(schema, input)).toEqual(expected.map(([pointer, message]) => ({ pointer, message })))
  })

  it('takes what is no id in a path for something that is not there', () => {
    expect(refusal(z.object({ id: z.uuid() }), { id: 'juniper' }, 'path').code).toBe('not-found')
  })

  it('points into the query by the name of the parameter', () => {
    const refused = refusal(z.strictObject({ on: z.iso.date().optional() }), { on: 'soon', of: '1' }, 'query')
    expect(refused.code).toBe('invalid-input')
    expect(refused.options.errors?.map((error) => error.pointer)).toEqual(['/on', '/of'])
  })
})
