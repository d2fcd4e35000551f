import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A worker process and its sign of life. */
export class WorkerProcess extends Model<
  InferAttributes<WorkerProcess>,
  InferCreationAttributes<WorkerProcess>
> {
  declare id: string;
  declare host: string;
  declare pid: number;
  declare codeVersion: string;
  declare jobRunId: CreationOptional<string | null>;
  declare startedAt: CreationOptional<Date>;
  declare heartbeatAt: CreationOptional<Date>;
  declare stoppedAt: CreationOptional<Date | null>;

  static define(sequelize: Sequelize): void {
    WorkerProcess.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        host: DataTypes.TEXT,
        pid: DataTypes.INTEGER,
        codeVersion: DataTypes.TEXT,
        jobRunId: DataTypes.UUID,
        startedAt: DataTypes.DATE,
        heartbeatAt: DataTypes.DATE,
        stoppedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'workers', timestamps: false },
    );
  }
}
