export * from './categories.js'
export * from './lifecycle.js'
export * from './urgency.js'
