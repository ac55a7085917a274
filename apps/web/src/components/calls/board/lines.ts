import type { ActionName, Tone } from './next-action'
import { blocksOf, type BoardRow, type BoardSection, type Section } from './rows'
import type { RowWords } from './useRowWords'

/** A row as it is drawn. */
export interface BoardLine {
  readonly row: BoardRow
  readonly words: RowWords
}

/** What is drawn as one: a row, or the rows that one walk brings. */
export interface BoardBlock {
  readonly key: string
  readonly lines: readonly BoardLine[]
  /** One tap for all of them; `null` where each has its own button. */
  readonly together: { readonly action: 'accept' | 'readBack'; readonly tone: Tone } | null
}

export interface DrawnSection {
  readonly section: Section
  readonly blocks: readonly BoardBlock[]
}

/** Rows as blocks, each with its words. What goes together must also wait for the same step of this person. */
export function drawSections(
  sections: readonly BoardSection[],
  wordsOf: (row: BoardRow) => RowWords,
): DrawnSection[] {
  return sections.map(({ section, rows }) => ({
    section,
    blocks: blocksOf(rows).map((block) => {
      const lines = block.map((row) => ({ row, words: wordsOf(row) }))
      return { key: block[0]!.item.id, lines, together: togetherOf(lines) }
    }),
  }))
}

function togetherOf(lines: readonly BoardLine[]): BoardBlock['together'] {
  if (lines.length < 2) return null
  const first = lines[0]!.words
  return first.action === 'accept' || first.action === 'readBack'
    ? { action: first.action, tone: first.tone }
    : null
}

/** What a line's button does by itself, `null` where the first of its block does it for all. */
export const ownAction = (block: BoardBlock, index: number): ActionName | null =>
  block.together !== null && index > 0 ? null : (block.lines[index]?.words.action ?? null)
