import { dayIn, type Clock } from '../src/platform/clock.js'

/** A clock that stands still until a test moves it. */
export class SettableClock implements Clock {
  #now: Date

  constructor(
    at: string | Date = '2026-12-01T10:45:00Z',
    private readonly zone = 'UTC',
  ) {
    this.#now = new Date(at)
  }

  now(): Date {
    return new Date(this.#now)
  }

  today(): string {
    return dayIn(this.zone, this.#now)
  }

  set(at: string | Date): void {
    this.#now = new Date(at)
  }

  /** @param ms milliseconds */
  forward(ms: number): void {
    this.#now = new Date(this.#now.getTime() + ms)
  }
}
