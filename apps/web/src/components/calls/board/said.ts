/** A question that a dialog asks before something is done. */
export const QUESTIONS = [
  'readBack',
  'facts',
  'confirm',
  'cancel',
  'cancelCall',
  'putBack',
  'notImplanted',
  'openAgain',
  'shelve',
] as const
export type Question = (typeof QUESTIONS)[number]

/** What the last tap came to, said at the foot of the screen. */
export interface Said {
  readonly text: string
  readonly tone: 'done' | 'refused'
  /** Takes the step back, or sends it again. */
  readonly again: { readonly what: 'undo' | 'send'; readonly run: () => void } | null
}
