import { randomUUID } from 'node:crypto'
import type { CallView, CaseView, ItemView, RailView, SessionView } from '@bellpull/contracts'
import type { House } from './house.js'
import type { Person } from './people.js'

/** A person without a screen: what a journey needs to have happened before it begins, or reads to compare. */
export interface Client {
  readonly userId: string
  get<T>(path: string): Promise<T>
  post<T>(path: string, body: unknown): Promise<T>
}

export async function client(house: House, person: Person): Promise<Client> {
  const session = await ask<SessionView>(house, null, 'POST', '/session', {
    email: `${person}@larchwater.example`,
    password: 'linen-brass-cord',
  })
  return {
    userId: session.user.id,
    get: (path) => ask(house, session.accessToken, 'GET', path),
    post: (path, body) => ask(house, session.accessToken, 'POST', path, body),
  }
}

async function ask<T>(
  house: House,
  token: string | null,
  method: string,
  path: string,
  body?: unknown,
): Promise<T> {
  const reply = await fetch(`${house.url}/api/v1${path}`, {
    method,
    headers: {
      'content-type': 'application/json',
      'idempotency-key': randomUUID(),
      ...(token !== null && { authorization: `Bearer ${token}` }),
    },
    ...(body !== undefined && { body: JSON.stringify(body) }),
  })
  if (!reply.ok) throw new Error(`${method} ${path}: ${reply.status} ${await reply.text()}`)
  return (await reply.json()) as T
}

/** One of today's cases, by its number. */
export async function caseOf(by: Client, caseNumber: string): Promise<CaseView> {
  const cases = await by.get<CaseView[]>('/cases')
  const found = cases.find((one) => one.caseNumber === caseNumber)
  if (!found) throw new Error(`no case ${caseNumber} today`)
  return found
}

/** Sizes of one kind of part that have a package in the core, most first. */
export async function sizesInCore(by: Client, of: CaseView, kind: RailView['kind'], variant: string) {
  const rails = await by.get<RailView[]>(`/cases/${of.id}/sizes`)
  const sizes = rails.find((rail) => rail.kind === kind)?.sizes ?? []
  return sizes
    .filter((size) => size.variant === variant && size.inCore > 0 && size.inRoom === 0)
    .sort((a, b) => b.inCore - a.inCore)
}

/** Open items of a case, newest call first. */
export async function itemsOf(by: Client, caseId: string): Promise<{ call: CallView; item: ItemView }[]> {
  const calls = await by.get<CallView[]>(`/cases/${caseId}/calls`)
  return [...calls].reverse().flatMap((call) => call.items.map((item) => ({ call, item })))
}

/** The item that was called last for a label, "Head 44". */
export async function itemCalled(
  by: Client,
  caseId: string,
  label: string,
): Promise<{ call: CallView; item: ItemView }> {
  const found = (await itemsOf(by, caseId)).find(({ item }) => item.label === label)
  if (!found) throw new Error(`${label} was not called`)
  return found
}

/** What the label of the held package says, as GS1 element string in brackets. */
export function labelOf(item: ItemView, but: { useByOn?: string } = {}): string {
  const { unit } = item
  if (!unit) throw new Error(`no package is held for ${item.label}`)
  const useBy = (but.useByOn ?? unit.useByOn).slice(2).replaceAll('-', '')
  const serial = unit.serial === null ? '' : `(21)${unit.serial}`
  return `(01)${unit.gtin}(17)${useBy}(10)${unit.lot}${serial}`
}

export interface Step {
  readonly name: string
  readonly [member: string]: unknown
}

/** Gives a command to an item at the version it has now. */
export async function onItem(by: Client, caseId: string, itemId: string, step: Step): Promise<CallView> {
  const found = (await itemsOf(by, caseId)).find(({ item }) => item.id === itemId)
  if (!found) throw new Error('no such item')
  return by.post(`/items/${itemId}/commands`, { ...step, expectedVersion: found.item.version })
}

/** Calls, and has it read back, confirmed, pulled and delivered: a package stands in the room, to be verified. */
export async function broughtToRoom(
  house: House,
  of: CaseView,
  catalogueItemId: string,
): Promise<{ call: CallView; item: ItemView }> {
  const [circulator, core, caller] = [
    await client(house, 'ifeoma'),
    await client(house, 'casimir'),
    await client(house, 'magda'),
  ]
  const call = await caller.post<CallView>(`/cases/${of.id}/calls`, {
    kind: 'confirmed',
    neededInMinutes: 5,
    calledBy: of.surgeon.id,
    side: of.side,
    items: [{ catalogueItemId, quantity: 1 }],
  })
  await circulator.post(`/calls/${call.id}/commands`, { name: 'readBack', expectedVersion: call.version })
  const [called] = call.items
  await onItem(core, of.id, called!.id, { name: 'pull', scan: labelOf(called!) })
  const delivered = await onItem(circulator, of.id, called!.id, { name: 'deliver' })
  return { call: delivered, item: delivered.items[0]! }
}
