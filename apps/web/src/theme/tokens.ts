/** The colours of the house, once for light and once for dark; everything on screen is made of these. */
export interface Tokens {
  readonly linen: string
  readonly paper: string
  readonly line: string
  readonly 'line-2': string
  /** Edge of a control that is not filled: at least 3 to 1 against paper and linen. */
  readonly edge: string
  readonly ink: string
  readonly 'ink-2': string
  readonly 'ink-3': string
  readonly brass: string
  /** Text in brass, and text on brass. */
  readonly 'brass-ink': string
  readonly 'on-brass': string
  readonly 'brass-wash': string
  readonly verdigris: string
  readonly 'verdigris-wash': string
  readonly madder: string
  readonly 'madder-wash': string
}

export const LIGHT: Tokens = {
  linen: '#f6f3ec',
  paper: '#ffffff',
  line: '#dcd5c6',
  'line-2': '#ebe6db',
  edge: '#8a8474',
  ink: '#1b2430',
  'ink-2': '#465261',
  'ink-3': '#5a6572',
  brass: '#b07c1a',
  'brass-ink': '#80560c',
  'on-brass': '#1b1405',
  'brass-wash': '#f5ead2',
  verdigris: '#1f6b5c',
  'verdigris-wash': '#dcebe5',
  madder: '#9c2f3a',
  'madder-wash': '#f4dfe0',
}

export const DARK: Tokens = {
  linen: '#12181f',
  paper: '#1a222b',
  line: '#34404d',
  'line-2': '#27323d',
  edge: '#70808f',
  ink: '#eef0ee',
  'ink-2': '#b7c0c8',
  'ink-3': '#9aa5af',
  brass: '#d9a441',
  'brass-ink': '#e8bb62',
  'on-brass': '#1b1405',
  'brass-wash': '#3a301b',
  verdigris: '#6fc2ad',
  'verdigris-wash': '#1c3832',
  madder: '#ef8d93',
  'madder-wash': '#43242a',
}

export const TOKEN_NAMES = Object.keys(LIGHT) as readonly (keyof Tokens)[]

/** Every pair of text and ground that the screens use; held to 4.5 to 1 by a test. */
export const TEXT_ON: readonly (readonly [keyof Tokens, keyof Tokens])[] = [
  ...(['linen', 'paper', 'brass-wash', 'verdigris-wash', 'madder-wash', 'line-2'] as const).flatMap(
    (ground) =>
      [
        ['ink', ground],
        ['ink-2', ground],
      ] as const,
  ),
  ['ink-3', 'linen'],
  ['ink-3', 'paper'],
  ['brass-ink', 'linen'],
  ['brass-ink', 'paper'],
  ['brass-ink', 'brass-wash'],
  ['verdigris', 'linen'],
  ['verdigris', 'paper'],
  ['verdigris', 'verdigris-wash'],
  ['madder', 'linen'],
  ['madder', 'paper'],
  ['madder', 'madder-wash'],
  ['linen', 'ink'],
  ['paper', 'ink'],
  ['on-brass', 'brass'],
  ['paper', 'verdigris'],
  ['paper', 'madder'],
]

/** Shapes that carry meaning against their ground; held to 3 to 1. */
export const SHAPE_ON: readonly (readonly [keyof Tokens, keyof Tokens])[] = [
  ['edge', 'paper'],
  ['edge', 'linen'],
  ['brass', 'paper'],
  ['brass', 'linen'],
  ['verdigris', 'paper'],
  ['madder', 'madder-wash'],
  ['ink-3', 'paper'],
]
