/** One tap of one person. Every retry of it carries the same key, so that it counts once. */
export interface Tap {
  readonly key: string
}

export const newTap = (): Tap => ({ key: uuid() })

/** `crypto.randomUUID` is there only on https and loopback; a house may serve plain http inside its walls. */
function uuid(): string {
  if (typeof crypto.randomUUID === 'function') return crypto.randomUUID()
  const bytes = crypto.getRandomValues(new Uint8Array(16))
  const marked = bytes.map((byte, i) =>
    i === 6 ? (byte & 0x0f) | 0x40 : i === 8 ? (byte & 0x3f) | 0x80 : byte,
  )
  const hex = [...marked].map((byte) => byte.toString(16).padStart(2, '0')).join('')
  return hex.replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, '$1-$2-$3-$4-$5')
}
