import { Check, Column, Entity, ForeignKey, Index, PrimaryColumn, Unique } from 'typeorm'
import {
  CATEGORIES,
  HOLDS,
  OUTCOMES,
  SIDES,
  STAGES,
  type Category,
  type Hold,
  type Outcome,
  type Side,
  type Stage,
} from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

/** One package, tray or thing that was called. */
@Entity('item')
@Unique('item_line_once', ['callId', 'lineNo'])
@Index('item_unit_one_open', ['unitId'], { unique: true, where: 'unit_id IS NOT NULL AND outcome IS NULL' })
@Check('item_category_known', oneOf('category', CATEGORIES))
@Check('item_side_known', oneOf('side', SIDES))
@Check('item_stage_known', oneOf('stage', STAGES))
@Check('item_outcome_known', oneOf('outcome', OUTCOMES))
@Check('item_hold_known', oneOf('hold', HOLDS))
@Check('item_is_something', '(catalogue_item_id IS NULL) = (text IS NOT NULL)')
@Check('item_text_short', 'char_length(text) <= 60')
@Check('item_hold_has_unit', `outcome IS NOT NULL OR (hold = 'held') = (unit_id IS NOT NULL)`)
@Check('item_none_free_goes_nowhere', `hold <> 'noneFree' OR stage = 'called'`)
@Check('item_accepted_by_somebody', `(stage = 'called') = (accepted_by IS NULL)`)
@Check(
  'item_stage_has_time',
  `(stage NOT IN ('accepted', 'pulled', 'inRoom', 'verified', 'opened') OR accepted_at IS NOT NULL) AND
    (stage <> 'pulled' OR pulled_at IS NOT NULL) AND
    (stage NOT IN ('inRoom', 'verified', 'opened') OR in_room_at IS NOT NULL) AND
    (stage <> 'verified' OR verified_at IS NOT NULL) AND
    (stage <> 'opened' OR (opened_at IS NOT NULL AND (verified_at IS NOT NULL OR opened_unverified)))`,
)
@Check('item_outcome_has_time', '(outcome IS NULL) = (settled_at IS NULL)')
@Check(
  'item_outcome_fits_stage',
  `(outcome NOT IN ('implanted', 'notImplanted') OR stage = 'opened') AND
    (outcome <> 'used' OR stage = 'opened' OR (category = 'other' AND stage = 'inRoom')) AND
    (outcome <> 'returned' OR stage IN ('pulled', 'inRoom', 'verified')) AND
    (outcome <> 'cancelled' OR stage <> 'opened')`,
)
@Check('item_put_back_whole', '(put_back_to IS NULL) = (put_back_since IS NULL)')
@Check('item_version_positive', 'version > 0')
export class Item {
  @PrimaryColumn('uuid') id!: string
  @ForeignKey('call', { name: 'item_of_call' })
  @Column('uuid', { name: 'call_id' })
  callId!: string
  @Column('smallint', { name: 'line_no' }) lineNo!: number
  @ForeignKey('catalogue_item', { name: 'item_of_catalogue' })
  @Column('uuid', { name: 'catalogue_item_id', nullable: true })
  catalogueItemId!: string | null
  @Column('text', { nullable: true }) text!: string | null
  @Column('text') category!: Category
  @Column('text') side!: Side
  @Column('text', { default: 'called' }) stage!: Stage
  @Column('text', { nullable: true }) outcome!: Outcome | null
  @Column('text') hold!: Hold
  @ForeignKey('unit', { name: 'item_has_unit' })
  @Column('uuid', { name: 'unit_id', nullable: true })
  unitId!: string | null
  @ForeignKey('person', { name: 'item_accepted_by' })
  @Column('uuid', { name: 'accepted_by', nullable: true })
  acceptedBy!: string | null
  @Column('timestamptz', { name: 'accepted_at', nullable: true }) acceptedAt!: Date | null
  @ForeignKey('person', { name: 'item_offered_to' })
  @Column('uuid', { name: 'offered_to', nullable: true })
  offeredTo!: string | null
  @Column('timestamptz', { name: 'pulled_at', nullable: true }) pulledAt!: Date | null
  @Column('timestamptz', { name: 'in_room_at', nullable: true }) inRoomAt!: Date | null
  @Column('timestamptz', { name: 'verified_at', nullable: true }) verifiedAt!: Date | null
  @Column('timestamptz', { name: 'opened_at', nullable: true }) openedAt!: Date | null
  @Column('timestamptz', { name: 'settled_at', nullable: true }) settledAt!: Date | null
  /** Who made the second check, and how: spoken, pin or touch. */
  @ForeignKey('person', { name: 'item_checked_by' })
  @Column('uuid', { name: 'checked_by', nullable: true })
  checkedBy!: string | null
  @Column('text', { name: 'second_check', nullable: true }) secondCheck!: string | null
  @Column('boolean', { name: 'opened_unverified', default: false }) openedUnverified!: boolean
  /** The label was typed, not scanned. */
  @Column('boolean', { default: false }) typed!: boolean
  @Column('text', { nullable: true }) reason!: string | null
  @ForeignKey('location', { name: 'item_put_back_to' })
  @Column('uuid', { name: 'put_back_to', nullable: true })
  putBackTo!: string | null
  @Column('timestamptz', { name: 'put_back_since', nullable: true }) putBackSince!: Date | null
  @Column('boolean', { name: 'put_back_inspect', default: false }) putBackInspect!: boolean
  @Column('timestamptz', { name: 'put_back_done_at', nullable: true }) putBackDoneAt!: Date | null
  @ForeignKey('item', { name: 'item_replaces' })
  @Column('uuid', { name: 'replaces_item_id', nullable: true })
  replacesItemId!: string | null
  /** Who took the last step, when, and where the item stood before it: what undo takes back. */
  @Column('jsonb', { name: 'last_step', nullable: true }) lastStep!: Record<string, unknown> | null
  @Column('integer', { default: 1 }) version!: number
}
