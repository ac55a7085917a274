import type { CallView, ItemView } from '@bellpull/contracts'
import { CATEGORY_RULES, type Heard } from '@bellpull/domain'
import type { ReadLabel } from './label'

/** Kinds of second check that this screen can take; a touch is taken by a registered tablet. */
export const METHODS = ['spoken', 'pin'] as const
export type Method = (typeof METHODS)[number]

export const MISSING = [
  'readBack',
  'label',
  'labelDiffers',
  'useBy',
  'lot',
  'intact',
  'checker',
  'heard',
  'pin',
] as const
export type Missing = (typeof MISSING)[number]

export interface Verifying {
  readonly call: CallView
  readonly item: ItemView
  readonly label: ReadLabel | null
  readonly differs: boolean
  readonly looked: boolean
  readonly method: Method
  readonly checkerId: string | null
  readonly heard: Heard | null
  readonly pin: string
}

/** Implants take two people; what is sterile for one use, and trays, one. */
export const needsTwo = (item: ItemView): boolean => CATEGORY_RULES[item.category].check === 'two-people'

/** The label stays covered until the circulator has keyed what was heard. */
export const isCovered = ({
  item,
  label,
  method,
  heard,
}: Pick<Verifying, 'item' | 'label' | 'method' | 'heard'>) =>
  needsTwo(item) && method === 'spoken' && label !== null && heard === null

/** What is still missing before it counts as verified, in the order of the work; nothing: the button is on. */
export function missingFor(v: Verifying): Missing[] {
  const missing: Missing[] = []
  if (v.call.readBack === null) missing.push('readBack')
  if (v.label === null) missing.push('label')
  else {
    if (v.differs) missing.push('labelDiffers')
    if (v.label.useByOn === null) missing.push('useBy')
    if (v.item.unit !== null && v.label.lot === null && v.label.serial === null) missing.push('lot')
  }
  if (!v.looked) missing.push('intact')
  if (needsTwo(v.item)) {
    if (v.checkerId === null) missing.push('checker')
    if (v.method === 'spoken' && v.heard === null) missing.push('heard')
    if (v.method === 'pin' && v.pin === '') missing.push('pin')
  }
  return missing
}
