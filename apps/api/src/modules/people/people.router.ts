import type { PersonRef } from '@bellpull/contracts'
import { Router } from 'express'
import type { DataSource } from 'typeorm'
import { z } from 'zod'
import { parse } from '../../platform/http/parse.js'
import { permit } from '../../platform/http/session.js'
import { Person } from './person.entity.js'

/** `GET /people`: who works here now, for everything that names a colleague. Addresses stay inside. */
export function peopleRouter({ dataSource }: { dataSource: DataSource }): Router {
  const router = Router()

  router.get('/people', permit('people.read'), async (req, res) => {
    parse(z.strictObject({}), req.query, 'query')
    const people = await dataSource
      .getRepository(Person)
      .find({ where: { active: true }, order: { name: 'ASC', id: 'ASC' } })
    res.json(people.map(({ id, initials, name, role }): PersonRef => ({ id, initials, name, role })))
  })

  return router
}
