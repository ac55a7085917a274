import type { SecondCheck } from '@bellpull/contracts'
import { SECOND_CHECKERS, isAsHeard, type CaseSide, type Heard } from '@bellpull/domain'
import { Problem } from '../../../platform/http/problem.js'
import type { Actor } from '../../../platform/http/session.js'
import type { CallWork } from '../call-work.js'
import type { ItemRow } from '../rows.js'

export interface CheckedBy {
  readonly checkerId: string
  readonly method: SecondCheck['method']
}

/** Which kinds of second check the house lets count. */
async function allowedMethods(work: CallWork): Promise<readonly string[]> {
  const { rows } = await work.sql.query<{ value: string[] }>({
    name: 'second-check-methods',
    text: "SELECT value FROM house_setting WHERE key = 'secondCheckMethods'",
  })
  return rows[0]?.value ?? ['pin', 'spoken']
}

async function mayCheck(work: CallWork, caseId: string, checkerId: string): Promise<boolean> {
  const { rows } = await work.sql.query<{ may: boolean }>({
    name: 'may-check',
    text: `SELECT p.active AND p.role = ANY($3) AND (
                  EXISTS (SELECT 1 FROM case_member m WHERE m.case_id = $2 AND m.person_id = p.id)
               OR EXISTS (SELECT 1 FROM surgical_case k WHERE k.id = $2 AND k.surgeon_id = p.id)
               OR EXISTS (SELECT 1 FROM session s WHERE s.person_id = p.id AND s.ended_at IS NULL AND s.expires_at > $4)) AS may
             FROM person p WHERE p.id = $1`,
    values: [checkerId, caseId, SECOND_CHECKERS, work.now],
  })
  return rows[0]?.may ?? false
}

/**
 * A second person, not the one who scans, of a role that may check and at hand, by a method that counts here.
 *
 * @param pinIsRight the answer to a PIN, asked before the transaction so that a wrong one is counted whatever follows.
 * @throws {Problem} `second-checker-needed`, `wrong-pin`, `not-as-heard`
 */
export async function demandSecondCheck(
  work: CallWork,
  job: {
    readonly actor: Actor
    readonly caseId: string
    readonly caseSide: CaseSide
    readonly items: readonly ItemRow[]
    readonly check: SecondCheck | undefined
    readonly pinIsRight: boolean | null
  },
): Promise<CheckedBy> {
  const { check, actor } = job
  if (!check) throw new Problem('second-checker-needed')
  if (check.checkerId === actor.id)
    throw new Problem('second-checker-needed', { detail: 'The second check is somebody else’s.' })
  if (!(await allowedMethods(work)).includes(check.method))
    throw new Problem('second-checker-needed', { detail: 'This house does not count that kind of check.' })
  if (!(await mayCheck(work, job.caseId, check.checkerId)))
    throw new Problem('second-checker-needed', {
      detail:
        'The second check is for a surgeon, scrub person, circulating or charge nurse of this case or signed in.',
    })
  if (check.method === 'touch')
    throw new Problem('second-checker-needed', {
      detail: 'A touch counts on the room’s own registered tablet only.',
    })
  if (check.method === 'pin' && !job.pinIsRight) throw new Problem('wrong-pin')
  if (check.method === 'spoken') demandHeard(check.heard, job.items, job.caseSide)
  return { checkerId: check.checkerId, method: check.method }
}

/** What the circulator keyed blind must be what the label says and what was called. */
function demandHeard(heard: Heard, items: readonly ItemRow[], caseSide: CaseSide): void {
  for (const { product, side } of items)
    if (!isAsHeard(heard, { size: product?.size ?? product?.label ?? '', side }, caseSide))
      throw new Problem('not-as-heard', {
        detail: `Heard: ${heard.size}, ${heard.side}. Read the label aloud again; if it is not what was called, reject the package.`,
      })
}
