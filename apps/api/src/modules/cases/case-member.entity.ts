import { Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'

/** Somebody on the team of a case, the surgeon included. */
@Entity('case_member')
@Index('case_member_by_person', ['personId'])
export class CaseMember {
  @ForeignKey('surgical_case', { name: 'case_member_of_case' })
  @PrimaryColumn('uuid', { name: 'case_id' })
  caseId!: string
  @ForeignKey('person', { name: 'case_member_person' })
  @PrimaryColumn('uuid', { name: 'person_id' })
  personId!: string
}
