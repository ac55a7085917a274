/**
 * What a hand scanner that works as a keyboard types, put together again. Pure: keys and times in, scans out.
 * Start values, common practice, no source: scanners type a key every 1 to 30 ms, people hardly below 60 ms.
 */

/** The longest pause inside one scan, in milliseconds; a busy page may hold keys up a little. */
const PAUSE_MS = 80
/** Fewer characters than this are a person, where only package labels are scanned. */
export const LEAST_OF_LABEL = 6
const LONGEST = 512

const GS = '\u001d'

export interface Key {
  readonly key: string
  readonly ctrl: boolean
  readonly alt: boolean
  /** The key is held down and repeats itself: a person. */
  readonly repeat: boolean
  /** When it was pressed, in milliseconds of any clock. */
  readonly atMs: number
}

export type Read =
  /** Not part of a scan: leave it to the page. */
  | { readonly take: false }
  /** Part of a scan: the page must not see it. */
  | { readonly take: true; readonly scan: string | null }

/**
 * Separators as scanners send them: ASCII 29, F8, Ctrl+], or Alt+029 on the number pad.
 *
 * @param least fewest characters of a scan; bins have shorter codes than packages.
 */
export function createWedge(least: () => number = () => LEAST_OF_LABEL) {
  let text = ''
  let lastMs = Number.NEGATIVE_INFINITY
  let altDigits = ''

  function reset(): void {
    text = ''
    altDigits = ''
  }

  function press(key: Key): Read {
    if (key.atMs - lastMs > PAUSE_MS || key.repeat) reset()
    lastMs = key.atMs
    const running = text.length > 0

    if (key.key === 'Shift' || key.key === 'Control' || key.key === 'Alt' || key.key === 'CapsLock')
      return { take: false }
    if (key.alt) {
      if (!/^\d$/.test(key.key)) return pass()
      altDigits += key.key
      return running ? { take: true, scan: null } : { take: false }
    }
    if (key.key === GS || key.key === 'F8' || (key.ctrl && (key.key === ']' || key.key === GS))) {
      // Alone it is a person's key; at the start of a scan it says nothing.
      if (!running) return { take: false }
      text += GS
      return { take: true, scan: null }
    }
    if (key.ctrl) return pass()
    if (key.key === 'Enter' || key.key === 'Tab') return finish()
    if ([...key.key].length !== 1) return pass()
    text += key.key
    if (text.length > LONGEST) return pass()
    return running ? { take: true, scan: null } : { take: false }
  }

  /** Alt was let go: what was keyed on the number pad meanwhile is one character. */
  function releaseAlt(): void {
    const code = Number.parseInt(altDigits, 10)
    if (text.length > 0 && code === 29) text += GS
    altDigits = ''
  }

  function finish(): Read {
    const scan = text
    reset()
    return scan.length >= least() ? { take: true, scan } : { take: false }
  }

  function pass(): Read {
    reset()
    return { take: false }
  }

  return { press, releaseAlt, reset }
}
