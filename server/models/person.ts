import type { Sequelize } from 'sequelize'
import type { Role } from '../../shared/contract/primitives.ts'
import { type Table, table, text, time } from './table.ts'

export type PersonRow = {
  id: string
  email: string
  /** How the address is looked up: lower case, NFC. */
  emailFolded: string
  name: string
  role: Role
  passwordHash: string
  createdAt: Date
  disabledAt: Date | null
}

export const people = (sequelize: Sequelize): Table<PersonRow> =>
  table<PersonRow>(sequelize, 'people', {
    id: { type: text, primaryKey: true },
    email: text,
    emailFolded: text,
    name: text,
    role: text,
    passwordHash: text,
    createdAt: time,
    disabledAt: time,
  })

export const foldEmail = (email: string): string => email.normalize('NFC').toLowerCase()
