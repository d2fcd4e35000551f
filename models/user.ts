import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A person with an account; what they may do stands in their memberships. */
export class User extends Model<InferAttributes<User>, InferCreationAttributes<User>> {
  declare id: string;
  declare email: string;
  declare name: string;
  declare passwordHash: CreationOptional<string | null>;
  declare sessionVersion: CreationOptional<number>;
  declare invitationHash: CreationOptional<Buffer | null>;
  declare invitationExpiresAt: CreationOptional<Date | null>;
  declare disabledAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    User.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        email: DataTypes.TEXT,
        name: DataTypes.TEXT,
        passwordHash: DataTypes.TEXT,
        sessionVersion: DataTypes.INTEGER,
        invitationHash: DataTypes.BLOB,
        invitationExpiresAt: DataTypes.DATE,
        disabledAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'users' },
    );
  }
}
