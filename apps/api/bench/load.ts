import { randomUUID } from 'node:crypto'
import { Agent, request } from 'node:http'
import { setTimeout as wait } from 'node:timers/promises'
import { answer } from './child.js'
import { quantileOf } from './numbers.js'
import { Taps, type TapPlan } from './world.js'

/** Makes calls as their rooms would, from a process of its own, and measures how long each takes. */

export interface Aim {
  readonly name: string
  readonly port: number
  /** Access tokens of the callers, in order. */
  readonly tokens: readonly string[]
}
export interface Burst {
  readonly aim: string
  readonly atOnce: number
  readonly warmMs: number
  readonly measuredMs: number
}
export interface BurstResult {
  readonly callsPerSecond: number
  readonly p50Ms: number
  readonly p99Ms: number
}
export interface Paced {
  readonly aim: string
  readonly calls: number
  /** Mean time between two taps; each waits for nobody. */
  readonly everyMs: number
}
/** What was answered 201: the call's id, and when the finger came down (monotonic clock of the machine, ms). */
export interface Acknowledged {
  readonly id: string
  readonly tappedMs: number
}

const aims = new Map<string, Aim & { readonly taps: Taps; readonly agent: Agent; readonly ids: string[] }>()

/** The same clock in every process of this machine, in milliseconds. */
const nowMs = (): number => Number(process.hrtime.bigint()) / 1e6

function aimOf(name: string) {
  const aim = aims.get(name)
  if (!aim) throw new Error(`no aim "${name}"`)
  return aim
}

interface Reply {
  readonly status: number
  readonly text: string
}

function post(agent: Agent, port: number, tap: TapPlan, token: string, key: string): Promise<Reply> {
  return new Promise((resolve, reject) => {
    const sent = request(
      {
        agent,
        port,
        host: '127.0.0.1',
        method: 'POST',
        path: `/api/v1/cases/${tap.caseId}/calls`,
        headers: {
          Authorization: `Bearer ${token}`,
          'Content-Type': 'application/json',
          'Content-Length': Buffer.byteLength(tap.body),
          'Idempotency-Key': key,
        },
      },
      (res) => {
        const chunks: Buffer[] = []
        res.on('data', (chunk: Buffer) => chunks.push(chunk))
        res.on('end', () => resolve({ status: res.statusCode ?? 0, text: Buffer.concat(chunks).toString() }))
        res.on('error', reject)
      },
    )
    sent.on('error', reject)
    sent.end(tap.body)
  })
}

const refusal = (name: string, { status, text }: Reply): Error =>
  new Error(`${name} answered ${status}: ${text.slice(0, 400)}`)

const idIn = (reply: Reply): string => (JSON.parse(reply.text) as { id: string }).id

/** One call that has to succeed. */
async function call(name: string): Promise<Acknowledged & { tookMs: number }> {
  const { taps, agent, port, tokens, ids } = aimOf(name)
  const tap = taps.next()
  const tappedMs = nowMs()
  const reply = await post(agent, port, tap, tokens[tap.person] ?? '', randomUUID())
  const tookMs = nowMs() - tappedMs
  if (reply.status !== 201 || reply.text.includes('"noneFree"')) throw refusal(name, reply)
  const id = idIn(reply)
  ids.push(id)
  return { id, tappedMs, tookMs }
}

async function burst({ aim, atOnce, warmMs, measuredMs }: Burst): Promise<BurstResult> {
  const from = nowMs() + warmMs
  const to = from + measuredMs
  const tookMs: number[] = []
  await Promise.all(
    Array.from({ length: atOnce }, async () => {
      while (nowMs() < to) {
        const made = await call(aim)
        const end = made.tappedMs + made.tookMs
        if (end >= from && end < to) tookMs.push(made.tookMs)
      }
    }),
  )
  tookMs.sort((a, b) => a - b)
  return {
    callsPerSecond: (tookMs.length / measuredMs) * 1000,
    p50Ms: quantileOf(tookMs, 0.5),
    p99Ms: quantileOf(tookMs, 0.99),
  }
}

/** A fixed number of calls one after the other. @returns how long each took, in order of size. */
async function inTurn({ aim, calls }: { aim: string; calls: number }): Promise<number[]> {
  const tookMs: number[] = []
  for (let n = 0; n < calls; n += 1) tookMs.push((await call(aim)).tookMs)
  return tookMs.sort((a, b) => a - b)
}

async function paced({ aim, calls, everyMs }: Paced): Promise<Acknowledged[]> {
  const running: Promise<Acknowledged>[] = []
  let next = nowMs()
  for (let n = 0; n < calls; n += 1) {
    running.push(call(aim))
    // Between half and one and a half times the mean, so that taps fall into no step with anything.
    next += everyMs * (0.5 + Math.random())
    const left = next - nowMs()
    if (left > 0) await wait(left)
  }
  return await Promise.all(running)
}

export interface Stubborn {
  readonly taps: number
  /** How many of them had to be sent again. */
  readonly again: number
}

let enough = false

/** Calls on while the database dies and comes back, until it is told that it is enough: each tap is sent again with its key until it is answered 201. */
async function stubborn({
  aim,
  atOnce,
  giveUpMs,
}: {
  aim: string
  atOnce: number
  giveUpMs: number
}): Promise<Stubborn> {
  const { taps, agent, port, tokens, ids } = aimOf(aim)
  let again = 0
  let count = 0
  enough = false
  const insist = async (): Promise<void> => {
    const tap = taps.next()
    const key = randomUUID()
    const giveUp = nowMs() + giveUpMs
    count += 1
    for (;;) {
      const reply = await post(agent, port, tap, tokens[tap.person] ?? '', key).catch(() => null)
      if (reply?.status === 201) {
        ids.push(idIn(reply))
        return
      }
      // 409 says that the first one is still running.
      if (reply && reply.status < 500 && reply.status !== 409) throw refusal(aim, reply)
      again += 1
      if (nowMs() > giveUp) throw new Error(`${aim} did not come back in ${giveUpMs} ms`)
      // Slow enough to stay below the house's limit of calls a person.
      await wait(400)
    }
  }
  await Promise.all(
    Array.from({ length: atOnce }, async () => {
      while (!enough) await insist()
    }),
  )
  return { taps: count, again }
}

async function get({ aim, path, times }: { aim: string; path: string; times: number }): Promise<number[]> {
  const { agent, port, tokens } = aimOf(aim)
  const tookMs: number[] = []
  for (let n = 0; n < times; n += 1) {
    const start = nowMs()
    await new Promise<void>((resolve, reject) => {
      const headers = { Authorization: `Bearer ${tokens[n % tokens.length] ?? ''}` }
      request({ agent, port, host: '127.0.0.1', path, headers }, (res) => {
        if (res.statusCode !== 200) reject(new Error(`${aim} answered ${res.statusCode ?? 0} to GET ${path}`))
        res.on('end', resolve).on('error', reject).resume()
      })
        .on('error', reject)
        .end()
    })
    tookMs.push(nowMs() - start)
  }
  return tookMs.sort((a, b) => a - b)
}

answer({
  aim({ cases, products, ...aim }: Aim & { cases: number; products: number }): void {
    aims.set(aim.name, {
      ...aim,
      taps: new Taps(cases, products),
      agent: new Agent({ keepAlive: true, maxSockets: 64 }),
      ids: [],
    })
  },
  tokens({ name, tokens }: { name: string; tokens: string[] }): void {
    aims.set(name, { ...aimOf(name), tokens })
  },
  burst,
  inTurn,
  paced,
  stubborn,
  enough(): void {
    enough = true
  },
  get,
  /** Ids of every call of an aim that was answered 201. */
  acknowledged: (name: string): string[] => aimOf(name).ids,
})
