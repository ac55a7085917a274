import { fork, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { join } from 'node:path'

interface Question {
  readonly id: number
  readonly name: string
  readonly argument: unknown
}
interface Answer {
  readonly id: number
  readonly value?: unknown
  readonly fault?: string
}

/** A process of the measurement that answers questions; its other end calls {@link answer}. */
export class Child {
  readonly #waiting = new Map<number, { resolve: (value: unknown) => void; reject: (error: Error) => void }>()
  #asked = 0

  private constructor(
    readonly process: ChildProcess,
    private readonly file: string,
  ) {
    process.on('message', (message) => {
      const { id, value, fault } = message as Answer
      const waiting = this.#waiting.get(id)
      this.#waiting.delete(id)
      if (fault === undefined) waiting?.resolve(value)
      else waiting?.reject(new Error(`${file}: ${fault}`))
    })
    process.once('exit', (code, signal) => {
      for (const { reject } of this.#waiting.values())
        reject(new Error(`${file} ended (${signal ?? String(code)})`))
      this.#waiting.clear()
    })
  }

  /** @param file beside this one. */
  static start(file: string): Child {
    const path = join(import.meta.dirname, file)
    return new Child(
      fork(path, { serialization: 'advanced', stdio: ['ignore', 'inherit', 'inherit', 'ipc'] }),
      file,
    )
  }

  ask<T>(name: string, argument?: unknown): Promise<T> {
    const id = ++this.#asked
    return new Promise<T>((resolve, reject) => {
      this.#waiting.set(id, { resolve: (value) => resolve(value as T), reject })
      const question: Question = { id, name, argument }
      this.process.send(question, (error) => error && reject(new Error(`${this.file}: ${error.message}`)))
    })
  }

  /** Ends it. Nothing that it holds has to be kept. */
  async stop(): Promise<void> {
    if (this.process.exitCode !== null || this.process.signalCode !== null) return
    const ended = once(this.process, 'exit')
    this.process.kill('SIGKILL')
    await ended
  }
}

/** Answers the questions of the process that forked this one, one handler a name, until that process is gone. */
export function answer(handlers: Readonly<Record<string, (argument: never) => unknown>>): void {
  process.on('disconnect', () => process.exit(0))
  process.on('message', (message) => {
    const { id, name, argument } = message as Question
    const handler = handlers[name]
    const reply = (answer: Omit<Answer, 'id'>): void => void process.send?.({ id, ...answer })
    Promise.resolve()
      .then(() => {
        if (!handler) throw new Error(`nobody answers "${name}"`)
        return handler(argument as never)
      })
      .then(
        (value) => reply({ value }),
        (error: unknown) =>
          reply({ fault: error instanceof Error ? (error.stack ?? error.message) : String(error) }),
      )
  })
}
