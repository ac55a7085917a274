export { peopleRouter } from './people.router.js'
export { Person } from './person.entity.js'
