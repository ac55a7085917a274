import { describe, expect, test } from 'vitest'
import { PART_KINDS, mustFit, type PartKind } from './parts.js'

describe('parts that must fit each other', () => {
  const pairs = ['head stem', 'head liner', 'shell liner', 'femur tibia', 'femur insert', 'tibia insert']

  test('are these pairs and no others, whichever is asked about first', () => {
    const found = PART_KINDS.flatMap((a) => PART_KINDS.filter((b) => mustFit(a, b)).map((b) => [a, b]))
    const wanted = pairs.flatMap((pair) => {
      const [a, b] = pair.split(' ') as [PartKind, PartKind]
      return [
        [a, b],
        [b, a],
      ]
    })
    expect(found.map(String).sort()).toEqual(wanted.map(String).sort())
  })
})
