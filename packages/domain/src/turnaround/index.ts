export * from './arrival.js'
export * from './proportion.js'
export * from './quantile.js'
