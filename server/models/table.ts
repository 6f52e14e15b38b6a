import { DataTypes, type Model, type ModelAttributes, type ModelStatic, type Sequelize } from 'sequelize'

export type Table<Row extends object> = ModelStatic<Model<Row, Row>>

/** Column types in one place. Text is bounded by the columns of the migration, times are UTC with milliseconds. */
export const text = DataTypes.STRING(1024)
export const longText = DataTypes.TEXT
export const time = DataTypes.DATE(3)
export const whole = DataTypes.BIGINT
export const real = DataTypes.DOUBLE
export const flag = DataTypes.BOOLEAN
export const bytes = DataTypes.BLOB

/** A model over an existing table: columns are the attributes in snake case, and no row gets times by itself. */
export function table<Row extends object>(
  sequelize: Sequelize,
  name: string,
  columns: ModelAttributes<Model<Row, Row>, Row>,
): Table<Row> {
  return sequelize.define<Model<Row, Row>>(name, columns, {
    tableName: name,
    timestamps: false,
    underscored: true,
  })
}

/** Plain rows of what a model found. */
export function plain<Row extends object>(found: readonly Model<Row, Row>[]): Row[] {
  return found.map((model) => model.get())
}
