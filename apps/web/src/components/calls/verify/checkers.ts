import type { CaseView, PersonRef } from '@bellpull/contracts'
import { SECOND_CHECKERS } from '@bellpull/domain'

export interface Checkers {
  /** On the team of the case. */
  readonly team: readonly PersonRef[]
  /** Of a role that may check; the house asks whether they are signed in. */
  readonly others: readonly PersonRef[]
}

/** Who may be the second person: of a role that may check, and never the first. */
export function checkersOf(team: CaseView['team'], people: readonly PersonRef[], meId: string): Checkers {
  const may = ({ id, role }: Pick<PersonRef, 'id' | 'role'>): boolean =>
    id !== meId && SECOND_CHECKERS.includes(role)
  const onTeam = new Set(team.map(({ id }) => id))
  return {
    team: team.filter(may),
    others: people.filter((person) => may(person) && !onTeam.has(person.id)),
  }
}
