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
  /** Null where the bound of all laboratories holds. */
  declare quotaBytes: CreationOptional<string | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Lab.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        name: DataTypes.TEXT,
        slug: DataTypes.TEXT,
        quotaBytes: DataTypes.BIGINT,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'labs' },
    );
  }
}
