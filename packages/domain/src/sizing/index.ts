export * from './head-cap.js'
export * from './nearest-size.js'
