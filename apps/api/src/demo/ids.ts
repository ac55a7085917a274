import { createHash } from 'node:crypto'

/** Namespace of the demo's ids; any UUID that nothing else uses. */
const NAMESPACE = Buffer.from('6d1f0c52b7a84e3e9a640952be110952', 'hex')

/** A UUID that is the same each time for the same thing: version 5 of RFC 9562. */
export function demoId(kind: string, name: string): string {
  const bytes = createHash('sha1').update(NAMESPACE).update(`${kind}:${name}`).digest().subarray(0, 16)
  bytes[6] = (bytes[6]! & 0x0f) | 0x50
  bytes[8] = (bytes[8]! & 0x3f) | 0x80
  const hex = bytes.toString('hex')
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join('-')
}
