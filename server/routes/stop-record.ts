import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { Part } from '@shared/domain/skills';
import { STOP_STATES, type PlanDto, type StopDto } from '@shared/contract/routes';

/** One row of `stops`. A call that is declined and offered again gets a new one. */
export class StopRecord extends Model<
  InferAttributes<StopRecord>,
  InferCreationAttributes<StopRecord>
> {
  declare id: string;
  declare stormId: string;
  declare technicianId: string;
  declare callId: string;
  declare position: number;
  declare state: StopDto['state'];
  declare locked: CreationOptional<boolean>;
  declare arriveAt: Date;
  declare finishAt: Date;
  declare etaAt: CreationOptional<Date | null>;
  /** The arrival time that the customer was last told. */
  declare toldEtaAt: CreationOptional<Date | null>;
  declare driveMinutes: number;
  /** No open road leads there from the place before it. */
  declare unreachable: CreationOptional<boolean>;
  /** Where the van was known to be when it set off. */
  declare travelFromLon: CreationOptional<number | null>;
  declare travelFromLat: CreationOptional<number | null>;
  /** Parts that the van fetches at the store on the way to it. */
  declare fetches: CreationOptional<Partial<Record<Part, number>> | null>;
  declare because: string;
  declare endedBecause: CreationOptional<string | null>;
  declare acceptedAt: CreationOptional<Date | null>;
  declare travelAt: CreationOptional<Date | null>;
  declare arrivedAt: CreationOptional<Date | null>;
  declare endedAt: CreationOptional<Date | null>;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    StopRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        technicianId: { type: DataTypes.UUID, allowNull: false },
        callId: { type: DataTypes.UUID, allowNull: false },
        position: { type: DataTypes.INTEGER, allowNull: false },
        state: { type: DataTypes.ENUM(...STOP_STATES), allowNull: false },
        locked: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
        arriveAt: { type: DataTypes.DATE(3), allowNull: false },
        finishAt: { type: DataTypes.DATE(3), allowNull: false },
        etaAt: DataTypes.DATE(3),
        toldEtaAt: DataTypes.DATE(3),
        driveMinutes: { type: DataTypes.DOUBLE, allowNull: false },
        unreachable: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
        travelFromLon: DataTypes.DOUBLE,
        travelFromLat: DataTypes.DOUBLE,
        fetches: DataTypes.JSON,
        because: { type: DataTypes.STRING(300), allowNull: false },
        endedBecause: DataTypes.STRING(300),
        acceptedAt: DataTypes.DATE(3),
        travelAt: DataTypes.DATE(3),
        arrivedAt: DataTypes.DATE(3),
        endedAt: DataTypes.DATE(3),
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'stops' },
    );
  }
}

/** One row of `plans`. */
export class PlanRecord extends Model<
  InferAttributes<PlanRecord>,
  InferCreationAttributes<PlanRecord>
> {
  declare id: string;
  declare stormId: string;
  declare state: PlanDto['state'];
  declare proposedAt: Date;
  declare proposedBy: string;
  /** Routes, what is left out, and the figures, as JSON text. */
  declare body: string;
  declare baseEpoch: number;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    PlanRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        state: {
          type: DataTypes.ENUM('proposed', 'published', 'discarded', 'overtaken'),
          allowNull: false,
        },
        proposedAt: { type: DataTypes.DATE(3), allowNull: false },
        proposedBy: { type: DataTypes.STRING(80), allowNull: false },
        body: { type: DataTypes.TEXT('medium'), allowNull: false },
        baseEpoch: { type: DataTypes.INTEGER, allowNull: false },
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'plans' },
    );
  }
}
