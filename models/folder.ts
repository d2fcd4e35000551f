import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A folder of frames announced before its files arrive; together they make one recording. */
export class Folder extends Model<InferAttributes<Folder>, InferCreationAttributes<Folder>> {
  declare id: string;
  declare labId: string;
  declare runId: string;
  declare recordingId: string;
  declare name: string;
  declare files: number;
  declare bytes: string;
  declare createdBy: CreationOptional<string | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Folder.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        runId: DataTypes.UUID,
        recordingId: DataTypes.UUID,
        name: DataTypes.TEXT,
        files: DataTypes.INTEGER,
        bytes: DataTypes.BIGINT,
        createdBy: DataTypes.UUID,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'folders' },
    );
  }
}
