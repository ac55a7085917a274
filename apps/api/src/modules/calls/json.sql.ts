/** JSON text that PostgreSQL puts together: literals, and SQL whose values stand between them. */
type Piece = { readonly literal: string } | { readonly sql: string }
export interface JsonSql {
  readonly pieces: readonly Piece[]
}

/** An id, or a word of a closed list: nothing in it needs escaping. @param sql never null */
export const word = (sql: string): JsonSql => ({ pieces: [{ literal: '"' }, { sql }, { literal: '"' }] })

/** A whole number. @param sql never null */
export const number = (sql: string): JsonSql => ({ pieces: [{ sql }] })

/** Any text, day, number or truth, or null. */
export const value = (sql: string): JsonSql => ({
  pieces: [{ sql: `coalesce(to_json(${sql})::text, 'null')` }],
})

/** JSON text already. @param sql never null */
export const raw = (sql: string): JsonSql => ({ pieces: [{ sql }] })

/** Values of one kind, one a row of `from`. @param order as after ORDER BY */
export const list = (item: JsonSql, from: string, order: string): JsonSql => ({
  pieces: [
    { literal: '[' },
    { sql: `coalesce((SELECT string_agg(${toSql(item)}, ',' ORDER BY ${order}) ${from}), '')` },
    { literal: ']' },
  ],
})

type Member = JsonSql | string | number | boolean | null | readonly []

/** An object; members that do not change are given as what they are. */
export const object = (members: Readonly<Record<string, Member>>): JsonSql => ({
  pieces: [
    ...Object.entries(members).flatMap(([key, member], index) => [
      { literal: `${index === 0 ? '{' : ','}${JSON.stringify(key)}:` },
      ...(isJsonSql(member) ? member.pieces : [{ literal: JSON.stringify(member) }]),
    ]),
    { literal: '}' },
  ],
})

const isJsonSql = (member: Member): member is JsonSql =>
  typeof member === 'object' && member !== null && 'pieces' in member

/**
 * SQL that yields the text. It is put together by `||`, several times as quick as `json_build_object`, which looks
 * up the type of every argument at every call. A value that is null against its promise makes the whole null, and
 * no column for JSON text takes that.
 */
export function toSql({ pieces }: JsonSql): string {
  const merged: Piece[] = []
  for (const piece of pieces) {
    const last = merged.at(-1)
    if (last && 'literal' in last && 'literal' in piece)
      merged[merged.length - 1] = { literal: last.literal + piece.literal }
    else merged.push(piece)
  }
  return merged
    .map((piece) => ('literal' in piece ? `'${piece.literal.replaceAll("'", "''")}'` : `(${piece.sql})`))
    .join(' || ')
}
