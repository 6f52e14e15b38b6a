import type { Sequelize } from 'sequelize'
import { designs, lots, revisions } from './design.ts'
import { instruments } from './instrument.ts'
import { people } from './person.ts'
import { records } from './record.ts'
import { sessions } from './session.ts'
import { stations } from './station.ts'
import { tokens } from './token.ts'

export type Models = ReturnType<typeof defineModels>

export function defineModels(sequelize: Sequelize) {
  return {
    people: people(sequelize),
    sessions: sessions(sequelize),
    stations: stations(sequelize),
    instruments: instruments(sequelize),
    tokens: tokens(sequelize),
    designs: designs(sequelize),
    revisions: revisions(sequelize),
    lots: lots(sequelize),
    records: records(sequelize),
  }
}
