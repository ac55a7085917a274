import type { CaseView, RailView, SizeView } from '@bellpull/contracts'
import { computed, reactive, type Ref } from 'vue'
import { instead, newDraft, touch, without, type Draft, type DraftLine } from '@/components/calls/room/draft'
import {
  firstVariant,
  isInNumber,
  planFor,
  railKey,
  spokenSize,
  SUPPLIES,
  variantsOf,
} from '@/components/size-rail/rails'
import { partAndSize } from '@/components/calls/room/tiles'
import { useText } from '@/composables/useText'

/**
 * The call that is being put together, one for each case of the room, so that a look at another case loses
 * nothing. Variants come from the plan where it names one.
 */
export function useRoomDraft(caseView: Ref<CaseView | null>, rails: Ref<readonly RailView[]>) {
  const { t } = useText()
  const drafts = reactive(new Map<string, Draft>())
  const variants = reactive(new Map<string, string | null>())

  const draft = computed<Draft | null>({
    get: () => {
      const of = caseView.value
      return of === null ? null : (drafts.get(of.id) ?? newDraft(of))
    },
    set: (next) => {
      if (caseView.value !== null && next !== null) drafts.set(caseView.value.id, next)
    },
  })
  const chosen = computed(() => new Set(draft.value?.lines.map(({ catalogueItemId }) => catalogueItemId)))

  const variantKey = (rail: RailView): string => `${caseView.value?.id ?? ''}/${railKey(rail)}`
  function variantOf(rail: RailView): string | null {
    const said = variants.get(variantKey(rail))
    return said === undefined ? firstVariant(rail, planFor(rail, caseView.value?.plan ?? [])) : said
  }

  function lineOf(rail: RailView, size: SizeView): DraftLine {
    const part = t(`room.parts.${rail.kind}`)
    const several = variantsOf(rail).length > 1
    const spoken = spokenSize(rail, size, part.toLowerCase())
    const inNumber = isInNumber(rail)
    const words = partAndSize({ label: spoken, size: size.label })
    return {
      railKey: railKey(rail),
      kind: rail.kind,
      catalogueItemId: size.catalogueItemId,
      part: rail.kind === 'other' ? rail.label : part,
      size: words.size,
      variant: size.variant,
      said:
        several && size.variant !== null && rail.label !== SUPPLIES ? `${spoken} ${size.variant}` : spoken,
      quantity: 1,
      inNumber,
    }
  }

  function choose(rail: RailView, size: SizeView): void {
    if (draft.value !== null) draft.value = touch(draft.value, lineOf(rail, size))
  }

  /** Another variant is said: the size that was chosen is now that of the new one, where it has it. */
  function setVariant(rail: RailView, variant: string | null): void {
    variants.set(variantKey(rail), variant)
    const mine = rail.sizes.filter(({ catalogueItemId }) => chosen.value.has(catalogueItemId))
    for (const size of mine) {
      if (draft.value === null || size.variant === variant) continue
      const twin = rail.sizes.find((one) => one.label === size.label && one.variant === variant)
      draft.value = without(draft.value, size.catalogueItemId)
      if (twin) draft.value = touch(draft.value, lineOf(rail, twin))
    }
  }

  function find(catalogueItemId: string): { rail: RailView; size: SizeView } | null {
    for (const rail of rails.value) {
      const size = rail.sizes.find((one) => one.catalogueItemId === catalogueItemId)
      if (size) return { rail, size }
    }
    return null
  }

  /** A size that is there becomes the choice of its rail; a person still has to call it. */
  function chooseInstead(catalogueItemId: string): string | null {
    const found = find(catalogueItemId)
    if (found === null || draft.value === null) return null
    variants.set(variantKey(found.rail), found.size.variant)
    draft.value = instead(draft.value, lineOf(found.rail, found.size))
    return railKey(found.rail)
  }

  /** Where a package of each chosen thing lies. */
  const places = computed(
    () =>
      new Map(
        [...chosen.value].map((id): [string, string] => {
          const size = find(id)?.size
          if (size === undefined) return [id, '']
          if (size.inRoom > 0) return [id, t('room.legend.room')]
          return [id, size.inCore > 0 ? t('room.legend.core') : t('room.legend.none')]
        }),
      ),
  )

  /** The words of a catalogue item, for a call that waits to be sent. */
  const say = (catalogueItemId: string): string => {
    const found = find(catalogueItemId)
    return found === null ? '' : lineOf(found.rail, found.size).said
  }

  function clear(): void {
    if (caseView.value !== null && draft.value !== null)
      drafts.set(caseView.value.id, { ...newDraft(caseView.value), calledBy: draft.value.calledBy })
  }

  return { draft, chosen, places, variantOf, setVariant, choose, chooseInstead, say, clear }
}
