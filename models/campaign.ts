import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A series of runs, such as one cooldown. */
export class Campaign extends Model<InferAttributes<Campaign>, InferCreationAttributes<Campaign>> {
  declare id: string;
  declare labId: string;
  declare name: string;
  declare description: CreationOptional<string | null>;
  declare tags: CreationOptional<string[]>;
  declare readings: CreationOptional<number>;
  declare knownCandidates: CreationOptional<number>;
  declare createdBy: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare deletedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Campaign.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        name: DataTypes.TEXT,
        description: DataTypes.TEXT,
        tags: DataTypes.ARRAY(DataTypes.TEXT),
        readings: DataTypes.SMALLINT,
        knownCandidates: DataTypes.SMALLINT,
        createdBy: DataTypes.UUID,
        revision: DataTypes.INTEGER,
        deletedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'campaigns' },
    );
  }
}
