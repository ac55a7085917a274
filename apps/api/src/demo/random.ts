import { createHash } from 'node:crypto'

/** A source of chance that gives the same numbers for the same seed, on every machine. */
export class Chance {
  #a: number
  #b: number
  #c: number
  #counter = 1

  /** @param seed any text; two texts give two unrelated rows of numbers. */
  constructor(seed: string) {
    const digest = createHash('sha256').update(seed).digest()
    this.#a = digest.readUInt32LE(0)
    this.#b = digest.readUInt32LE(4)
    this.#c = digest.readUInt32LE(8)
    for (let round = 0; round < 12; round += 1) this.next()
  }

  /** From 0 inclusive to 1 exclusive (the small fast counter generator of C. Doty-Humphrey, 32 bits). */
  next(): number {
    const sum = (this.#a + this.#b + this.#counter) | 0
    this.#counter = (this.#counter + 1) | 0
    this.#a = this.#b ^ (this.#b >>> 9)
    this.#b = (this.#c + (this.#c << 3)) | 0
    this.#c = ((this.#c << 21) | (this.#c >>> 11)) + sum
    return (sum >>> 0) / 4_294_967_296
  }

  /** True in that share of all questions. */
  hits(share: number): boolean {
    return this.next() < share
  }

  /** A whole number, both ends possible. */
  whole(from: number, to: number): number {
    return from + Math.floor(this.next() * (to - from + 1))
  }

  pick<T>(from: readonly T[]): T {
    const found = from[Math.floor(this.next() * from.length)]
    if (found === undefined) throw new RangeError('nothing to pick from')
    return found
  }

  /** One of the keys, each as often as its weight says. */
  weighted<T>(weights: readonly (readonly [T, number])[]): T {
    let left = this.next() * weights.reduce((sum, [, weight]) => sum + weight, 0)
    for (const [value, weight] of weights) {
      left -= weight
      if (left < 0) return value
    }
    return this.pick(weights)[0]
  }

  /** Waiting times are skewed: log-normal, by its median and the spread of its logarithm. */
  logNormal(median: number, spread: number): number {
    const radius = Math.sqrt(-2 * Math.log(1 - this.next()))
    return median * Math.exp(spread * radius * Math.cos(2 * Math.PI * this.next()))
  }
}
