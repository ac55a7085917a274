export * from './permissions.js'
export * from './roles.js'
