export { keepHouse, sweep } from './housekeeping.js'
