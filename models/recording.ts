import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type {
  ImageQuality,
  RecordingMetadata,
  RecordingState,
  StackRefusal,
  StackWarning,
} from '@/lib/recording-facts';

/** One camera stack taken in a run. */
export class Recording extends Model<InferAttributes<Recording>, InferCreationAttributes<Recording>> {
  declare id: string;
  declare labId: string;
  declare runId: string;
  declare folderId: CreationOptional<string | null>;
  declare name: string;
  declare state: RecordingState;
  declare kind: 'file' | 'folder';
  declare bytes: string;
  declare frames: CreationOptional<number | null>;
  declare width: CreationOptional<number | null>;
  declare height: CreationOptional<number | null>;
  declare bitDepth: CreationOptional<number | null>;
  declare sha256: CreationOptional<string | null>;
  declare clientSha256: CreationOptional<string | null>;
  declare imageQuality: CreationOptional<ImageQuality | null>;
  declare metadata: CreationOptional<RecordingMetadata | null>;
  declare refusal: CreationOptional<StackRefusal | null>;
  declare warnings: CreationOptional<StackWarning[]>;
  declare usePages: CreationOptional<number | null>;
  declare channel: CreationOptional<string | null>;
  declare createdBy: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare deletedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Recording.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        runId: DataTypes.UUID,
        folderId: DataTypes.UUID,
        name: DataTypes.TEXT,
        state: DataTypes.TEXT,
        kind: DataTypes.TEXT,
        bytes: DataTypes.BIGINT,
        frames: DataTypes.INTEGER,
        width: DataTypes.INTEGER,
        height: DataTypes.INTEGER,
        bitDepth: DataTypes.INTEGER,
        sha256: DataTypes.TEXT,
        clientSha256: { type: DataTypes.TEXT, field: 'client_sha256' },
        imageQuality: DataTypes.JSONB,
        metadata: DataTypes.JSONB,
        refusal: DataTypes.JSONB,
        warnings: DataTypes.JSONB,
        usePages: DataTypes.INTEGER,
        channel: DataTypes.TEXT,
        createdBy: DataTypes.UUID,
        revision: DataTypes.INTEGER,
        deletedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'recordings' },
    );
  }
}
