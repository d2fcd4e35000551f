import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { Channel, Drive } from '@/tracking/flow/run-conditions';
import type { Tracer } from '@/tracking/types';

/** One set of conditions. Columns are SI; anything may still be unknown. */
export class Run extends Model<InferAttributes<Run>, InferCreationAttributes<Run>> {
  declare id: string;
  declare labId: string;
  declare campaignId: string;
  declare name: string;
  declare startedAt: CreationOptional<Date | null>;
  declare tags: CreationOptional<string[]>;
  declare notes: CreationOptional<string | null>;
  declare pixelSizeM: CreationOptional<number | null>;
  declare frameIntervalS: CreationOptional<number | null>;
  declare exposureS: CreationOptional<number | null>;
  declare sheetThicknessM: CreationOptional<number | null>;
  declare temperatureK: CreationOptional<number | null>;
  declare pressurePa: CreationOptional<number | null>;
  declare drive: CreationOptional<Drive | null>;
  declare heatFluxWM2: CreationOptional<number | null>;
  declare heatLeakW: CreationOptional<number | null>;
  declare flowDirection: CreationOptional<[number, number] | null>;
  declare gravityDirection: CreationOptional<[number, number] | null>;
  declare tracer: CreationOptional<Tracer | null>;
  declare channel: CreationOptional<Channel | null>;
  declare tracersPerAreaM2: CreationOptional<number | null>;
  declare gammaSM2: CreationOptional<number | null>;
  declare v0MS: CreationOptional<number | null>;
  declare createdBy: CreationOptional<string | null>;
  declare revision: CreationOptional<number>;
  declare deletedAt: CreationOptional<Date | null>;
  declare createdAt: CreationOptional<Date>;
  declare updatedAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    Run.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        campaignId: DataTypes.UUID,
        name: DataTypes.TEXT,
        startedAt: DataTypes.DATE,
        tags: DataTypes.ARRAY(DataTypes.TEXT),
        notes: DataTypes.TEXT,
        pixelSizeM: DataTypes.DOUBLE,
        frameIntervalS: DataTypes.DOUBLE,
        exposureS: DataTypes.DOUBLE,
        sheetThicknessM: DataTypes.DOUBLE,
        temperatureK: DataTypes.DOUBLE,
        pressurePa: DataTypes.DOUBLE,
        drive: DataTypes.TEXT,
        heatFluxWM2: { type: DataTypes.DOUBLE, field: 'heat_flux_w_m2' },
        heatLeakW: DataTypes.DOUBLE,
        flowDirection: DataTypes.ARRAY(DataTypes.DOUBLE),
        gravityDirection: DataTypes.ARRAY(DataTypes.DOUBLE),
        tracer: DataTypes.JSONB,
        channel: DataTypes.JSONB,
        tracersPerAreaM2: { type: DataTypes.DOUBLE, field: 'tracers_per_area_m2' },
        gammaSM2: { type: DataTypes.DOUBLE, field: 'gamma_s_m2' },
        v0MS: { type: DataTypes.DOUBLE, field: 'v0_m_s' },
        createdBy: DataTypes.UUID,
        revision: DataTypes.INTEGER,
        deletedAt: DataTypes.DATE,
        createdAt: DataTypes.DATE,
        updatedAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'runs' },
    );
  }
}
