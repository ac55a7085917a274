import type { Delta } from './publisher.js'

/** How long a delta waits for an earlier one of its room, in milliseconds. */
export const WAITS_MS = 100

interface Room {
  /** The revision that is to be told next. */
  next: number
  readonly waiting: Map<number, Delta>
  timer: NodeJS.Timeout | null
}

/**
 * Tells the deltas of each room in the order of their revisions. The database answers on several connections, so
 * that of two commits right after one another the later may be known here first; to a screen that would look like
 * a gap, and cost it a reload. A revision that does not come in time is given up: then the gap is true.
 */
export class InOrder {
  readonly #rooms = new Map<string, Room>()

  constructor(
    private readonly tell: (delta: Delta) => void,
    private readonly waitsMs = WAITS_MS,
  ) {}

  add(delta: Delta): void {
    const room = this.#rooms.get(delta.roomId) ?? { next: delta.revision, waiting: new Map(), timer: null }
    this.#rooms.set(delta.roomId, room)
    if (delta.revision > room.next) {
      room.waiting.set(delta.revision, delta)
      room.timer ??= setTimeout(() => this.#giveUp(room), this.waitsMs).unref()
      return
    }
    this.tell(delta)
    if (delta.revision === room.next) {
      room.next += 1
      this.#tellWaiting(room)
    }
  }

  /** Tells at once what waits, and lets nothing wait that comes no more. */
  close(): void {
    for (const room of this.#rooms.values()) this.#giveUp(room)
    this.#rooms.clear()
  }

  #tellWaiting(room: Room): void {
    for (let delta = room.waiting.get(room.next); delta; delta = room.waiting.get(room.next)) {
      room.waiting.delete(room.next)
      room.next += 1
      this.tell(delta)
    }
    if (room.waiting.size === 0 && room.timer) {
      clearTimeout(room.timer)
      room.timer = null
    }
  }

  #giveUp(room: Room): void {
    if (room.timer) clearTimeout(room.timer)
    room.timer = null
    for (const revision of [...room.waiting.keys()].sort((a, b) => a - b)) {
      const delta = room.waiting.get(revision)
      room.waiting.delete(revision)
      room.next = revision + 1
      if (delta) this.tell(delta)
    }
  }
}
