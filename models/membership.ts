import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { Role } from '@/lib/access';

/** The roles of one person in one laboratory. */
export class Membership extends Model<InferAttributes<Membership>, InferCreationAttributes<Membership>> {
  declare id: string;
  declare labId: string;
  declare userId: string;
  declare roles: Role[];
  declare noticesOff: CreationOptional<string[]>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Membership.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        userId: DataTypes.UUID,
        roles: DataTypes.ARRAY(DataTypes.TEXT),
        noticesOff: DataTypes.ARRAY(DataTypes.TEXT),
        revision: DataTypes.INTEGER,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'memberships' },
    );
  }
}
