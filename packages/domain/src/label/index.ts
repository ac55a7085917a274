export { LABEL_REFUSALS, LABEL_WARNINGS } from './label.js'
export type { Label, LabelRefusal, LabelResult, LabelScheme, LabelWarning } from './label.js'
