import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { RecipeRequest } from '@/tracking/types';

/** One version of a named recipe; versions are added, never edited. */
export class RecipeVersion extends Model<
  InferAttributes<RecipeVersion>,
  InferCreationAttributes<RecipeVersion>
> {
  declare id: string;
  declare labId: string;
  declare name: string;
  declare version: number;
  declare note: CreationOptional<string | null>;
  declare fields: RecipeRequest;
  declare createdBy: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    RecipeVersion.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        name: DataTypes.TEXT,
        version: DataTypes.INTEGER,
        note: DataTypes.TEXT,
        fields: DataTypes.JSONB,
        createdBy: DataTypes.UUID,
        revision: DataTypes.INTEGER,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'recipes' },
    );
  }
}
