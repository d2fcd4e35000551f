import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { CorrectionKind } from '@/tracking/corrections/correction';

/** One entry of an analysis's log of corrections; rows are appended, never changed. */
export class CorrectionRow extends Model<
  InferAttributes<CorrectionRow>,
  InferCreationAttributes<CorrectionRow>
> {
  declare id: string;
  declare labId: string;
  declare analysisId: string;
  declare seq: number;
  declare kind: CorrectionKind;
  declare fields: Record<string, unknown>;
  declare gesture: CreationOptional<string | null>;
  declare madeTrack: CreationOptional<number | null>;
  declare requestKey: CreationOptional<string | null>;
  declare createdBy: string;
  declare createdAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    CorrectionRow.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        analysisId: DataTypes.UUID,
        seq: DataTypes.INTEGER,
        kind: DataTypes.TEXT,
        fields: DataTypes.JSONB,
        gesture: DataTypes.UUID,
        madeTrack: DataTypes.INTEGER,
        requestKey: DataTypes.TEXT,
        createdBy: DataTypes.UUID,
        createdAt: DataTypes.DATE,
      },
      { sequelize, tableName: 'corrections', updatedAt: false },
    );
  }
}
