import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** Who did what and when; rows are only ever added. */
export class AuditEntry extends Model<InferAttributes<AuditEntry>, InferCreationAttributes<AuditEntry>> {
  declare id: string;
  declare labId: CreationOptional<string | null>;
  declare userId: CreationOptional<string | null>;
  declare action: string;
  declare subjectKind: string;
  declare subjectId: CreationOptional<string | null>;
  declare detail: CreationOptional<Record<string, unknown>>;
  declare createdAt: CreationOptional<Date>;

  static define(sequelize: Sequelize): void {
    AuditEntry.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        labId: DataTypes.UUID,
        userId: DataTypes.UUID,
        action: DataTypes.TEXT,
        subjectKind: DataTypes.TEXT,
        subjectId: DataTypes.TEXT,
        detail: DataTypes.JSONB,
        // The database's clock is the one that all processes share, and no jump of another one changes the order.
        createdAt: { type: DataTypes.DATE, defaultValue: sequelize.literal('now()') },
      },
      { sequelize, tableName: 'audit_entries', timestamps: false },
    );
  }
}
