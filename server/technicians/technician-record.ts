import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { ShiftBreak } from '@shared/domain/shift-breaks';
import type { Part, Skill } from '@shared/domain/skills';

/** One row of `technicians`. */
export class TechnicianRecord extends Model<
  InferAttributes<TechnicianRecord>,
  InferCreationAttributes<TechnicianRecord>
> {
  declare id: string;
  declare name: string;
  declare phone: string;
  declare skills: Skill[];
  /** Parts on the van and how many. */
  declare van: Partial<Record<Part, number>>;
  declare startLon: number;
  declare startLat: number;
  declare positionLon: CreationOptional<number | null>;
  declare positionLat: CreationOptional<number | null>;
  declare positionAt: CreationOptional<Date | null>;
  declare positionAccuracyMeters: CreationOptional<number | null>;
  declare active: CreationOptional<boolean>;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    TechnicianRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        name: { type: DataTypes.STRING(80), allowNull: false },
        phone: { type: DataTypes.STRING(16), allowNull: false },
        skills: { type: DataTypes.JSON, allowNull: false },
        van: { type: DataTypes.JSON, allowNull: false },
        startLon: { type: DataTypes.DOUBLE, allowNull: false },
        startLat: { type: DataTypes.DOUBLE, allowNull: false },
        positionLon: DataTypes.DOUBLE,
        positionLat: DataTypes.DOUBLE,
        positionAt: DataTypes.DATE(3),
        positionAccuracyMeters: DataTypes.DOUBLE,
        active: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: true },
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'technicians' },
    );
  }
}

/** One row of `shifts`. */
export class ShiftRecord extends Model<
  InferAttributes<ShiftRecord>,
  InferCreationAttributes<ShiftRecord>
> {
  declare id: string;
  declare technicianId: string;
  declare startsAt: Date;
  declare endsAt: Date;
  declare breaks: CreationOptional<ShiftBreak[]>;

  static register(sequelize: Sequelize): void {
    ShiftRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        technicianId: { type: DataTypes.UUID, allowNull: false },
        startsAt: { type: DataTypes.DATE(3), allowNull: false },
        endsAt: { type: DataTypes.DATE(3), allowNull: false },
        breaks: { type: DataTypes.JSON, allowNull: false, defaultValue: [] },
      },
      { sequelize, tableName: 'shifts' },
    );
  }
}
