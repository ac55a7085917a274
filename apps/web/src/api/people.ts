import { personRef, roomView } from '@bellpull/contracts'
import { z } from 'zod'
import { http } from './http'

export const peopleApi = {
  list: () => http.get('/people', z.array(personRef)),
  rooms: () => http.get('/rooms', z.array(roomView)),
}
