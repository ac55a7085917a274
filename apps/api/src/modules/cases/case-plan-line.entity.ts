import { Column, Entity, ForeignKey, PrimaryColumn } from 'typeorm'
import type { PartKind } from '@bellpull/domain'

/** What the plan expects of one kind of part: a size, and the range to have at hand. */
@Entity('case_plan_line')
export class CasePlanLine {
  @ForeignKey('surgical_case', { name: 'case_plan_line_of_case' })
  @PrimaryColumn('uuid', { name: 'case_id' })
  caseId!: string
  @PrimaryColumn('smallint', { name: 'line_no' }) lineNo!: number
  @Column('text') kind!: PartKind
  @ForeignKey('implant_system', { name: 'case_plan_line_of_system' })
  @Column('uuid', { name: 'system_id' })
  systemId!: string
  @Column('text', { nullable: true }) variant!: string | null
  @Column('text', { nullable: true }) planned!: string | null
  @Column('text', { name: 'size_from', nullable: true }) sizeFrom!: string | null
  @Column('text', { name: 'size_to', nullable: true }) sizeTo!: string | null
  /** A labelled hint such as "other side: stem 10"; never a default. */
  @Column('text', { nullable: true }) hint!: string | null
}
