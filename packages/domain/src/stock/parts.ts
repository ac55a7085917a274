/** Kinds of part that have a rail of sizes, as clients know them. */
export const PART_KINDS = [
  'head',
  'stem',
  'glenoid',
  'shell',
  'liner',
  'femur',
  'tibia',
  'insert',
  'patella',
  'cement',
  'other',
] as const
export type PartKind = (typeof PART_KINDS)[number]

/**
 * Parts of one system that have to fit each other. Whether two given parts do fit is a rule of their
 * system; where no rule has been run the pair is *not checked*, never ticked.
 */
const PARTNERS: Readonly<Partial<Record<PartKind, readonly PartKind[]>>> = {
  head: ['stem', 'liner'],
  stem: ['head'],
  shell: ['liner'],
  liner: ['shell', 'head'],
  femur: ['tibia', 'insert'],
  tibia: ['femur', 'insert'],
  insert: ['femur', 'tibia'],
}

export const mustFit = (a: PartKind, b: PartKind): boolean => PARTNERS[a]?.includes(b) ?? false
