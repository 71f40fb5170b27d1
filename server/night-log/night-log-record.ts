import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { NightLogDto, NightLogRowView } from '@shared/contract/night-logs';

/** One row of `night_logs`: a file as it came, and how far its import is. */
export class NightLogRecord extends Model<
  InferAttributes<NightLogRecord>,
  InferCreationAttributes<NightLogRecord>
> {
  declare id: string;
  declare stormId: string;
  declare fileName: string;
  declare bytes: Buffer;
  declare state: NightLogDto['state'];
  declare encoding: string;
  /** The guessed columns, as JSON text. */
  declare columns: string;
  declare rowCount: number;
  declare doneCount: CreationOptional<number>;
  declare counts: NightLogDto['counts'];
  declare trouble: CreationOptional<string | null>;
  declare uploadedAt: Date;
  declare userId: string;

  static register(sequelize: Sequelize): void {
    NightLogRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        fileName: { type: DataTypes.STRING(200), allowNull: false },
        bytes: { type: DataTypes.BLOB('long'), allowNull: false },
        state: {
          type: DataTypes.ENUM('read', 'importing', 'imported', 'failed'),
          allowNull: false,
        },
        encoding: { type: DataTypes.STRING(20), allowNull: false },
        columns: { type: DataTypes.TEXT('medium'), allowNull: false },
        rowCount: { type: DataTypes.INTEGER, allowNull: false },
        doneCount: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        counts: { type: DataTypes.JSON, allowNull: false },
        trouble: DataTypes.STRING(300),
        uploadedAt: { type: DataTypes.DATE(3), allowNull: false },
        userId: { type: DataTypes.UUID, allowNull: false },
      },
      { sequelize, tableName: 'night_logs' },
    );
  }
}

/** One row of `night_log_rows`: one line of a log and what became of it. */
export class NightLogRowRecord extends Model<
  InferAttributes<NightLogRowRecord>,
  InferCreationAttributes<NightLogRowRecord>
> {
  declare id: string;
  declare logId: string;
  declare stormId: string;
  declare line: number;
  declare rowKey: string;
  /** The cells as they came, as JSON text. */
  declare cells: string;
  /** What was understood of them, as JSON text. */
  declare understood: CreationOptional<string | null>;
  declare outcome: NightLogRowView['outcome'];
  declare reason: string;
  declare callId: CreationOptional<string | null>;
  declare settledBy: CreationOptional<string | null>;

  static register(sequelize: Sequelize): void {
    NightLogRowRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        logId: { type: DataTypes.UUID, allowNull: false },
        stormId: { type: DataTypes.UUID, allowNull: false },
        line: { type: DataTypes.INTEGER, allowNull: false },
        rowKey: { type: DataTypes.STRING(80), allowNull: false },
        cells: { type: DataTypes.TEXT('medium'), allowNull: false },
        understood: DataTypes.TEXT('medium'),
        outcome: {
          type: DataTypes.ENUM('call', 'folded', 'aside', 'empty', 'known', 'settled'),
          allowNull: false,
        },
        reason: { type: DataTypes.STRING(300), allowNull: false },
        callId: DataTypes.UUID,
        settledBy: DataTypes.UUID,
      },
      { sequelize, tableName: 'night_log_rows' },
    );
  }
}
