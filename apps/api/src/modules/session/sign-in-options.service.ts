import type { SignInOptions } from '@bellpull/contracts'
import { ROLES } from '@bellpull/domain'
import type { DataSource } from 'typeorm'
import { Person } from '../people/index.js'

/** How the accounts of the demo are told from those of a house: by the ending of their addresses. */
export interface DemoAccounts {
  readonly password: string
  /** Ending of the accounts' e-mail addresses, `@` included. */
  readonly emailEnding: string
}

/** What the sign-in page may say before anybody has signed in. */
export class SignInOptionsService {
  constructor(
    private readonly dataSource: DataSource,
    private readonly houseName: string,
    /** `null` in a house that is not the demo: then nothing about accounts is said. */
    private readonly demo: DemoAccounts | null,
  ) {}

  async get(): Promise<SignInOptions> {
    return { houseName: this.houseName, demo: this.demo ? await this.#accounts(this.demo) : null }
  }

  async #accounts({ password, emailEnding }: DemoAccounts): Promise<SignInOptions['demo']> {
    const people = await this.dataSource.getRepository(Person).findBy({ active: true })
    const accounts = people
      .filter((person) => person.email.endsWith(emailEnding))
      .map(({ email, name, role }) => ({ email, name, role }))
      .sort((a, b) => ROLES.indexOf(a.role) - ROLES.indexOf(b.role) || a.name.localeCompare(b.name))
    return accounts.length === 0 ? null : { password, accounts }
  }
}
