import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { WorkState } from '@/lib/analysis-facts';

/** One piece of work for a worker. `attempt` is the token that every write of its results must show. */
export class JobRun extends Model<InferAttributes<JobRun>, InferCreationAttributes<JobRun>> {
  declare id: string;
  declare labId: string;
  declare kind: string;
  declare subjectId: string;
  declare chunk: CreationOptional<number>;
  declare payload: CreationOptional<Record<string, unknown>>;
  declare state: WorkState;
  declare attempt: CreationOptional<number>;
  declare maxAttempts: CreationOptional<number>;
  declare notBefore: CreationOptional<Date>;
  declare workerId: CreationOptional<string | null>;
  declare heartbeatAt: CreationOptional<Date | null>;
  declare progress: CreationOptional<number>;
  declare errorCode: CreationOptional<string | null>;
  declare errorDetail: CreationOptional<string | null>;
  declare startedAt: CreationOptional<Date | null>;
  declare finishedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    JobRun.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        kind: DataTypes.TEXT,
        subjectId: DataTypes.UUID,
        chunk: DataTypes.INTEGER,
        payload: DataTypes.JSONB,
        state: DataTypes.TEXT,
        attempt: DataTypes.INTEGER,
        maxAttempts: DataTypes.INTEGER,
        notBefore: DataTypes.DATE,
        workerId: DataTypes.UUID,
        heartbeatAt: DataTypes.DATE,
        progress: DataTypes.DOUBLE,
        errorCode: DataTypes.TEXT,
        errorDetail: DataTypes.TEXT,
        startedAt: DataTypes.DATE,
        finishedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'job_runs' },
    );
  }
}
