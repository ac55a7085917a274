import type { CALL_COMMAND_BODIES, ITEM_COMMAND_BODIES, SecondCheck } from '@bellpull/contracts'
import type { CallTransaction, Tap } from './call-transaction.js'
import type { CallWork } from './call-work.js'
import { CALL_HANDLERS, ITEM_HANDLERS } from './commands/index.js'
import { findCallOf } from './rows.js'
import type { StoredAnswer } from '../../platform/http/idempotency.js'
import { Problem } from '../../platform/http/problem.js'

/** Asks whether a PIN is that person's; counts a wrong one, whatever follows. */
export interface PinChecker {
  check(personId: string, pin: string): Promise<boolean>
}

interface CommandInput<N extends string> {
  readonly name: N
  readonly expectedVersion: number
  readonly secondCheck?: SecondCheck | undefined
}
export type CallCommandInput = CommandInput<keyof typeof CALL_COMMAND_BODIES>
export type ItemCommandInput = CommandInput<keyof typeof ITEM_COMMAND_BODIES>

/** Gives commands to calls and items: one transaction each, once for its key. */
export class CallCommands {
  constructor(
    private readonly transaction: CallTransaction,
    private readonly pins: PinChecker,
  ) {}

  /** @param body parsed by the contract of its name. */
  async onCall(tap: Tap, callId: string, body: CallCommandInput): Promise<StoredAnswer> {
    const pinIsRight = await this.#askPin(body)
    return this.transaction.run(tap, 200, async (work) => {
      const { call, items } = await loadLocked(work, { callId })
      if (call.version !== body.expectedVersion)
        throw new Problem('call-moved-on', { detail: `It is at version ${call.version} now.` })
      const handle = CALL_HANDLERS[body.name] as (job: unknown) => Promise<void>
      await handle({ work, actor: tap.actor, call, items, body: { ...body, pinIsRight } })
      return call.id
    })
  }

  /** @param body parsed by the contract of its name. */
  async onItem(tap: Tap, itemId: string, body: ItemCommandInput): Promise<StoredAnswer> {
    const pinIsRight = await this.#askPin(body)
    return this.transaction.run(tap, 200, async (work) => {
      const { call, items } = await loadLocked(work, { itemId })
      const item = items.find(({ id }) => id === itemId)
      if (!item) throw new Problem('not-found')
      if (item.version !== body.expectedVersion)
        throw new Problem('item-moved-on', { detail: `It is at version ${item.version} now.` })
      const handle = ITEM_HANDLERS[body.name] as (job: unknown) => Promise<void>
      await handle({ work, actor: tap.actor, call, item, body: { ...body, pinIsRight } })
      return call.id
    })
  }

  async #askPin({ secondCheck: check }: CommandInput<string>): Promise<boolean | null> {
    return check?.method === 'pin' ? this.pins.check(check.checkerId, check.pin) : null
  }
}

async function loadLocked(work: CallWork, of: { callId: string } | { itemId: string }) {
  const found = await findCallOf(work.sql, of)
  if (!found) throw new Problem('not-found')
  await work.lockRooms([found.roomId])
  return work.load(found.id)
}
