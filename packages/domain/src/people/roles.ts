/** Everybody who signs in has exactly one role. Suppliers have none: they get e-mail. */
export const ROLES = [
  'surgeon',
  'scrub',
  'circulator',
  'runner',
  'core',
  'charge',
  'coordinator',
  'admin',
] as const
export type Role = (typeof ROLES)[number]
