import { computed } from 'vue'
import { useCasesStore } from '@/stores/cases'

/** Cases in a marked time-out: nothing of theirs comes forward or sounds until it has ended. */
export function useQuietCases() {
  const cases = useCasesStore()
  const quietCaseIds = computed<ReadonlySet<string>>(
    () =>
      new Set(
        cases.today
          .filter((one) => one.timeOutAt !== null && one.timeOutEndedAt === null)
          .map(({ id }) => id),
      ),
  )
  return { quietCaseIds }
}
