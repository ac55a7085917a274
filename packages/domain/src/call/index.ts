export * from './categories.js'
export * from './heard.js'
export * from './lifecycle.js'
export * from './urgency.js'
