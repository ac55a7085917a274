export { eventsRouter } from './events.router.js'
export { EventsService } from './events.service.js'
