import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A laboratory: the wall around everything that its members make. */
export class Lab extends Model<InferAttributes<Lab>, InferCreationAttributes<Lab>> {
  declare id: string;
  declare name: string;
  declare slug: string;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Lab.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        name: DataTypes.TEXT,
        slug: DataTypes.TEXT,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'labs' },
    );
  }
}
