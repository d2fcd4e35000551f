import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { AnalysisStage, AnalysisSummary, ImageFacts, WorkState } from '@/lib/analysis-facts';
import type { Conditions, Recipe, RecipeRequest } from '@/tracking/types';

/** One recipe applied to one recording by one version of the code. */
export class Analysis extends Model<InferAttributes<Analysis>, InferCreationAttributes<Analysis>> {
  declare id: string;
  declare labId: string;
  declare recordingId: string;
  declare recipeId: CreationOptional<string | null>;
  declare recipeRequest: RecipeRequest;
  declare recipe: CreationOptional<Recipe | null>;
  declare conditions: Conditions;
  declare state: WorkState;
  declare stage: AnalysisStage;
  declare progress: CreationOptional<number>;
  declare frames: number;
  declare chunkFrames: number;
  declare imageModel: CreationOptional<Buffer | null>;
  declare imageFacts: CreationOptional<ImageFacts | null>;
  declare summary: CreationOptional<AnalysisSummary | null>;
  declare spotsPerFrame: CreationOptional<number[] | null>;
  declare tracksRevision: CreationOptional<number>;
  declare staleSince: CreationOptional<Date | null>;
  declare signedOffAt: CreationOptional<Date | null>;
  declare signedOffBy: CreationOptional<string | null>;
  declare contentHash: CreationOptional<string | null>;
  declare codeVersion: string;
  declare errorCode: CreationOptional<string | null>;
  declare errorDetail: CreationOptional<string | null>;
  declare startedAt: CreationOptional<Date | null>;
  declare finishedAt: CreationOptional<Date | null>;
  declare createdBy: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Analysis.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        recordingId: DataTypes.UUID,
        recipeId: DataTypes.UUID,
        recipeRequest: DataTypes.JSONB,
        recipe: DataTypes.JSONB,
        conditions: DataTypes.JSONB,
        state: DataTypes.TEXT,
        stage: DataTypes.TEXT,
        progress: DataTypes.DOUBLE,
        frames: DataTypes.INTEGER,
        chunkFrames: DataTypes.INTEGER,
        imageModel: DataTypes.BLOB,
        imageFacts: DataTypes.JSONB,
        summary: DataTypes.JSONB,
        spotsPerFrame: DataTypes.ARRAY(DataTypes.INTEGER),
        tracksRevision: DataTypes.INTEGER,
        staleSince: DataTypes.DATE,
        signedOffAt: DataTypes.DATE,
        signedOffBy: DataTypes.UUID,
        contentHash: DataTypes.TEXT,
        codeVersion: DataTypes.TEXT,
        errorCode: DataTypes.TEXT,
        errorDetail: DataTypes.TEXT,
        startedAt: DataTypes.DATE,
        finishedAt: DataTypes.DATE,
        createdBy: DataTypes.UUID,
        revision: DataTypes.INTEGER,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'analyses' },
    );
  }
}
