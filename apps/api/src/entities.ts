import { Event } from './modules/audit/event.entity.js'
import { IdempotencyKey } from './modules/audit/idempotency-key.entity.js'
import { Call } from './modules/calls/call.entity.js'
import { Item } from './modules/calls/item.entity.js'
import { CaseMember } from './modules/cases/case-member.entity.js'
import { CasePlanLine } from './modules/cases/case-plan-line.entity.js'
import { SurgicalCase } from './modules/cases/surgical-case.entity.js'
import { CatalogueItem } from './modules/catalogue/catalogue-item.entity.js'
import { ImplantSystem } from './modules/catalogue/implant-system.entity.js'
import { Supplier } from './modules/catalogue/supplier.entity.js'
import { Person } from './modules/people/person.entity.js'
import { HouseSetting } from './modules/places/house-setting.entity.js'
import { Location } from './modules/places/location.entity.js'
import { Room } from './modules/places/room.entity.js'
import { RefreshToken } from './modules/session/refresh-token.entity.js'
import { Session } from './modules/session/session.entity.js'
import { SignInFailure } from './modules/session/sign-in-failure.entity.js'
import { Movement } from './modules/stock/movement.entity.js'
import { Unit } from './modules/stock/unit.entity.js'

/** Every table of the house. A test holds them against the migrations. */
export const ENTITIES = [
  Person,
  Session,
  RefreshToken,
  SignInFailure,
  HouseSetting,
  Room,
  Location,
  Supplier,
  ImplantSystem,
  CatalogueItem,
  Unit,
  Movement,
  SurgicalCase,
  CaseMember,
  CasePlanLine,
  Call,
  Item,
  Event,
  IdempotencyKey,
]
