import type { Cluster } from '../../test/cluster.js'
import { addUnits, type Stock } from '../fill.js'
import { GOALS, type Reached } from '../goals.js'
import { createHouse, openProduct, runAll, type ProductHouse } from '../houses.js'
import type { Child } from '../child.js'
import { medianOf, quantileOf } from '../numbers.js'
import type { Options } from '../options.js'
import { times } from './calls.js'

/** Few products, so that a thousand packages are a thousand of what is called for. */
const PRODUCTS = 20
const FEW_UNITS = 1_000
const OPEN_CALLS = 200
/** Slices a house; each is short, so that the houses meet the same weather. */
const SLICES = 12
const SNAPSHOTS = 30

/** The product against itself: an old and full house over a small new one. */
export async function measureGrowth(cluster: Cluster, load: Child, options: Options): Promise<Reached[]> {
  const calls = options.growthCalls * (SLICES + 1) + OPEN_CALLS
  const stock = (units: number, pastCalls: number): Stock => ({
    cases: calls,
    products: PRODUCTS,
    unitsAProduct: Math.ceil((units + OPEN_CALLS * 2) / PRODUCTS),
    pastCalls,
  })
  const open = async (name: string, kind: Stock): Promise<ProductHouse> => {
    const house = await openProduct(name, await createHouse(cluster, name, kind), kind)
    await load.ask('aim', {
      name,
      port: house.port,
      tokens: house.tokens(),
      cases: kind.cases,
      products: PRODUCTS,
    })
    await load.ask('inTurn', { aim: name, calls: OPEN_CALLS })
    await runAll(house.url, ['ANALYZE'])
    return house
  }
  const small = await open('small', stock(FEW_UNITS, 0))
  const full = await open('many', stock(options.manyUnits, 0))
  const old = await open('old', stock(FEW_UNITS, options.manyPast))
  const houses = [small, full, old]
  try {
    const board = await byTurns([small, old], ({ name }) =>
      load.ask<number[]>('get', { aim: name, path: '/api/v1/board', times: SNAPSHOTS }),
    )
    const call = await byTurns(houses, async (house) => {
      const tookMs = await load.ask<number[]>('inTurn', { aim: house.name, calls: options.growthCalls })
      // What was taken is received again, so that a house of a thousand stays one.
      await runAll(house.url, [addUnits(Math.ceil((options.growthCalls * 2) / PRODUCTS), PRODUCTS)])
      return tookMs
    })
    const many = `${options.manyUnits.toLocaleString('en')} units`
    const past = `${options.manyPast.toLocaleString('en')} past calls`
    return [
      { goal: GOALS.units, ...ratio(call.get(full), call.get(small), many) },
      { goal: GOALS.pastCalls, ...ratio(call.get(old), call.get(small), past) },
      { goal: GOALS.board, ...ratio(board.get(old), board.get(small), past) },
    ]
  } finally {
    for (const house of houses) await house.close()
  }
}

/** Medians of the slices of each house, the first (which warms up) left out. */
async function byTurns(
  houses: readonly ProductHouse[],
  slice: (house: ProductHouse) => Promise<number[]>,
): Promise<Map<ProductHouse, number[]>> {
  const medians = new Map<ProductHouse, number[]>(houses.map((house) => [house, []]))
  for (let n = 0; n <= SLICES; n += 1)
    for (const house of n % 2 === 0 ? houses : [...houses].reverse()) {
      const tookMs = await slice(house)
      if (n > 0) medians.get(house)?.push(quantileOf(tookMs, 0.5))
    }
  return medians
}

function ratio(ours: number[] = [], theirs: number[] = [], what: string): { value: number; note: string } {
  const pairs = ours.map((value, n) => value / (theirs[n] ?? Number.NaN))
  return {
    value: medianOf(pairs),
    note: `${what}: ${times(medianOf(ours), medianOf(theirs)).replace('peer', 'without')}`,
  }
}
