/** The same kind of news is told at most this often, in milliseconds. */
export const EVERY_MS = 200

/**
 * Tells the first news at once, and gathers what follows: many small pieces of news of one kind reach the screens
 * as one, and make them ask the house once.
 */
export class Gathered {
  readonly #ids = new Set<string>()
  #timer: NodeJS.Timeout | null = null

  constructor(
    private readonly tell: (ids: string[]) => void,
    private readonly everyMs = EVERY_MS,
  ) {}

  add(ids: Iterable<string>): void {
    for (const id of ids) this.#ids.add(id)
    if (!this.#timer) this.#tellAll()
  }

  /** Tells at once what was gathered. */
  close(): void {
    if (this.#timer) clearTimeout(this.#timer)
    this.#timer = null
    if (this.#ids.size > 0) this.tell([...this.#ids])
    this.#ids.clear()
  }

  #tellAll(): void {
    this.#timer = null
    if (this.#ids.size === 0) return
    this.tell([...this.#ids])
    this.#ids.clear()
    this.#timer = setTimeout(() => this.#tellAll(), this.everyMs).unref()
  }
}
