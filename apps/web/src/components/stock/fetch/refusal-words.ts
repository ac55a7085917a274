import type { Refusal } from '@/composables/useCommand'
import type { Text } from '@/composables/useText'

/** "SLB-HD-50C, lot L26A014": whatever a refusal says of one side of the comparison. */
function inWords(value: unknown): string {
  if (typeof value !== 'object' || value === null) return ''
  return Object.values(value)
    .filter((one): one is string => typeof one === 'string' && one !== '' && one !== 'either')
    .join(', ')
}

/** Both values of a refusal that compares two, each on a line of its own; nothing for any other refusal. */
export function differences(problem: Refusal['problem'], t: Text['t']): string[] {
  const expected = inWords(problem?.members['expected'])
  const scanned = inWords(problem?.members['scanned'])
  return [
    ...(expected ? [t('fetch.expected', { what: expected })] : []),
    ...(scanned ? [t('fetch.scanned', { what: scanned })] : []),
    ...(!expected && !scanned && problem?.detail ? [problem.detail] : []),
  ]
}
