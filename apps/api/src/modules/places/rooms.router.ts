import type { RoomView } from '@bellpull/contracts'
import { Router } from 'express'
import type { DataSource } from 'typeorm'
import { z } from 'zod'
import { parse } from '../../platform/http/parse.js'
import { permit } from '../../platform/http/session.js'
import { Room } from './room.entity.js'

/** `GET /rooms`: every operating room, with the revision of its board. */
export function roomsRouter({ dataSource }: { dataSource: DataSource }): Router {
  const router = Router()

  router.get('/rooms', permit('rooms.read'), async (req, res) => {
    parse(z.strictObject({}), req.query, 'query')
    const rooms = await dataSource.getRepository(Room).find({ order: { number: 'ASC' } })
    res.json(rooms.map(({ id, number, revision }): RoomView => ({ id, number, revision })))
  })

  return router
}
