export * from './choose-unit.js'
export * from './eligibility.js'
export * from './parts.js'
