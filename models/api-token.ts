import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { Scope } from '@/lib/access';

/** A token for scripts: of one person in one laboratory, hashed, revocable. */
export class ApiToken extends Model<InferAttributes<ApiToken>, InferCreationAttributes<ApiToken>> {
  declare id: string;
  declare labId: string;
  declare userId: string;
  declare name: string;
  declare tokenHash: Buffer;
  declare hint: string;
  declare scopes: Scope[];
  declare lastUsedAt: CreationOptional<Date | null>;
  declare revokedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    ApiToken.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        userId: DataTypes.UUID,
        name: DataTypes.TEXT,
        tokenHash: DataTypes.BLOB,
        hint: DataTypes.TEXT,
        scopes: DataTypes.ARRAY(DataTypes.TEXT),
        lastUsedAt: DataTypes.DATE,
        revokedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'api_tokens' },
    );
  }
}
