import { once } from 'node:events'
import { createServer } from 'node:net'
import { describe, expect, it } from 'vitest'
import { DISTANCE, following, freeOrOther, holderOf, isFree } from './ports.js'

describe('ports that follow from the house', () => {
  it.each([
    [8420, DISTANCE.mailPage, 9420],
    [8421, DISTANCE.smtp, 10_421],
    [65_000, DISTANCE.postgres, 62_000],
  ])('%i and a distance of %i make %i', (port, distance, expected) => {
    expect(following(port, distance)).toBe(expected)
  })

  it('differ between two houses on neighbouring ports', () => {
    const all = [8420, 8421].flatMap((port) => [
      port,
      ...Object.values(DISTANCE).map((each) => following(port, each)),
    ])
    expect(new Set(all).size).toBe(all.length)
  })
})

describe('a port that somebody has', () => {
  it('is not free, is replaced by another one, and its holder is named', async () => {
    const server = createServer().listen(0, '127.0.0.1')
    await once(server, 'listening')
    const address = server.address()
    const port = typeof address === 'object' && address !== null ? address.port : 0
    expect(await isFree(port)).toBe(false)
    expect(await freeOrOther(port)).not.toBe(port)
    expect(holderOf(port)).toContain(`process ${process.pid} `)
    server.close()
    await once(server, 'close')
    expect(await isFree(port)).toBe(true)
    expect(await freeOrOther(port)).toBe(port)
    expect(holderOf(port)).toBeNull()
  })
})
