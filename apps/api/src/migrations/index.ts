import { CreateCalls1796083200003 } from './1796083200003-CreateCalls.js'
import { CreateCases1796083200002 } from './1796083200002-CreateCases.js'
import { CreatePeople1796083200000 } from './1796083200000-CreatePeople.js'
import { CreateStock1796083200001 } from './1796083200001-CreateStock.js'

/** In order; a new migration is added at the end and an old one is never changed. */
export const MIGRATIONS = [
  CreatePeople1796083200000,
  CreateStock1796083200001,
  CreateCases1796083200002,
  CreateCalls1796083200003,
]
