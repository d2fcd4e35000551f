import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** One file on its way; the bytes and their count lie with the upload store. */
export class Upload extends Model<InferAttributes<Upload>, InferCreationAttributes<Upload>> {
  declare id: string;
  declare labId: string;
  declare userId: string;
  declare runId: string;
  declare recordingId: string;
  declare folderId: CreationOptional<string | null>;
  declare position: CreationOptional<number | null>;
  declare filename: string;
  declare bytes: string;
  declare sha256: CreationOptional<string | null>;
  /** `Upload-Metadata` as it was sent. */
  declare metadata: CreationOptional<string | null>;
  declare state: 'arriving' | 'finished' | 'ended';
  declare expiresAt: CreationOptional<Date | null>;
  declare finishedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Upload.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        userId: DataTypes.UUID,
        runId: DataTypes.UUID,
        recordingId: DataTypes.UUID,
        folderId: DataTypes.UUID,
        position: DataTypes.INTEGER,
        filename: DataTypes.TEXT,
        bytes: DataTypes.BIGINT,
        sha256: DataTypes.TEXT,
        metadata: DataTypes.TEXT,
        state: DataTypes.TEXT,
        expiresAt: DataTypes.DATE,
        finishedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'uploads' },
    );
  }
}
