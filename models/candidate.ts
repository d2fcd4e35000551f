import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { CandidateFacts } from '@/lib/analysis-facts';

/** Two tracks that met and parted, as measured by an analysis. */
export class Candidate extends Model<InferAttributes<Candidate>, InferCreationAttributes<Candidate>> {
  declare id: string;
  declare labId: string;
  declare analysisId: string;
  declare event: number;
  declare trackA: number;
  declare trackB: number;
  declare t0S: number;
  declare pChance: CreationOptional<number | null>;
  declare qValue: CreationOptional<number | null>;
  declare accepted: boolean;
  declare facts: CandidateFacts;
  /** Revision of the tracks from which on it is no candidate any more. */
  declare endedRevision: CreationOptional<number | null>;
  declare revision: CreationOptional<number>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Candidate.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        analysisId: DataTypes.UUID,
        event: DataTypes.INTEGER,
        trackA: DataTypes.INTEGER,
        trackB: DataTypes.INTEGER,
        t0S: { type: DataTypes.DOUBLE, field: 't0_s' },
        pChance: DataTypes.DOUBLE,
        qValue: DataTypes.DOUBLE,
        accepted: DataTypes.BOOLEAN,
        facts: DataTypes.JSONB,
        endedRevision: DataTypes.INTEGER,
        revision: DataTypes.INTEGER,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'candidates' },
    );
  }
}
