/** An instant as clients read it: UTC, milliseconds, `Z`; SQL null stays null. */
export const isoSql = (column: string): string =>
  `to_char(${column} AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')`
