/** A CHECK expression that lets a text column hold only these words, written as a migration writes it. */
export function oneOf(column: string, words: readonly string[]): string {
  return `${column} IN (${words.map((word) => `'${word}'`).join(', ')})`
}
