import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { ADDRESS_KINDS, type Address } from '@shared/contract/calls';
import { CALL_STATES, type CallState } from '@shared/domain/call-state';
import type { PowerTimes } from '@shared/domain/cold-unit';
import type { Part, Skill } from '@shared/domain/skills';
import type { Span } from '@shared/domain/thaw/uncooled-time';

export interface StoredPhoneCheck {
  answers: Record<string, string | number>;
  startedAt: number | null;
  concludedAt: number | null;
}

/** One row of `calls`. What may follow what is shared/domain/call-state.ts; this only stores. */
export class CallRecord extends Model<
  InferAttributes<CallRecord>,
  InferCreationAttributes<CallRecord>
> {
  declare id: string;
  declare stormId: string;
  declare number: number;
  declare householdId: CreationOptional<string | null>;
  declare state: CallState;
  declare receivedAt: Date;
  declare settledAt: CreationOptional<Date | null>;
  declare name: string;
  declare phone: CreationOptional<string | null>;
  declare addressText: string;
  declare unitNo: string;
  declare lon: CreationOptional<number | null>;
  declare lat: CreationOptional<number | null>;
  declare addressKind: Address['kind'];
  declare areaId: CreationOptional<string | null>;
  declare powerOutAt: Date;
  declare powerBackAt: CreationOptional<Date | null>;
  /** When the power was back for a while before it went again. */
  declare powerOnSpans: CreationOptional<Span[]>;
  declare timesFrom: 'area' | 'caller';
  declare restoredAt: CreationOptional<Date | null>;
  declare claimUserId: CreationOptional<string | null>;
  declare claimUntil: CreationOptional<Date | null>;
  declare language: 'en' | 'es';
  declare mayText: boolean;
  declare danger: boolean;
  declare householdAtRisk: CreationOptional<boolean>;
  declare source: 'phone' | 'night-log' | 'customer';
  declare phoneCheck: StoredPhoneCheck;
  declare skills: Skill[];
  declare parts: Part[];
  /** Likely causes in words, likeliest first. */
  declare causes: string[];
  declare duplicateOfId: CreationOptional<string | null>;
  /** The window that the customer agreed to for the next visit. */
  declare windowFrom: CreationOptional<Date | null>;
  declare windowTo: CreationOptional<Date | null>;
  declare version: CreationOptional<number>;

  address(): Address {
    return {
      text: this.addressText,
      unitNo: this.unitNo,
      lonLat: this.lon === null || this.lat === null ? null : [this.lon, this.lat],
      kind: this.addressKind,
    };
  }

  /** Cooling counts as lost with the power, at the earliest plausible moment. */
  powerTimes(): PowerTimes {
    return {
      lostAt: this.powerOutAt.getTime(),
      restoredAt: this.restoredAt?.getTime() ?? null,
      powerOnSpans: this.powerOnSpans,
    };
  }

  static register(sequelize: Sequelize): void {
    CallRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        number: { type: DataTypes.INTEGER, allowNull: false },
        householdId: DataTypes.UUID,
        state: { type: DataTypes.ENUM(...CALL_STATES), allowNull: false },
        receivedAt: { type: DataTypes.DATE(3), allowNull: false },
        settledAt: DataTypes.DATE(3),
        name: { type: DataTypes.STRING(120), allowNull: false },
        phone: DataTypes.STRING(16),
        addressText: { type: DataTypes.STRING(160), allowNull: false },
        unitNo: { type: DataTypes.STRING(24), allowNull: false },
        lon: DataTypes.DOUBLE,
        lat: DataTypes.DOUBLE,
        addressKind: { type: DataTypes.ENUM(...ADDRESS_KINDS), allowNull: false },
        areaId: DataTypes.UUID,
        powerOutAt: { type: DataTypes.DATE(3), allowNull: false },
        powerBackAt: DataTypes.DATE(3),
        powerOnSpans: { type: DataTypes.JSON, allowNull: false, defaultValue: [] },
        timesFrom: { type: DataTypes.ENUM('area', 'caller'), allowNull: false },
        restoredAt: DataTypes.DATE(3),
        claimUserId: DataTypes.UUID,
        claimUntil: DataTypes.DATE(3),
        language: { type: DataTypes.ENUM('en', 'es'), allowNull: false },
        mayText: { type: DataTypes.BOOLEAN, allowNull: false },
        danger: { type: DataTypes.BOOLEAN, allowNull: false },
        householdAtRisk: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
        source: { type: DataTypes.ENUM('phone', 'night-log', 'customer'), allowNull: false },
        phoneCheck: { type: DataTypes.JSON, allowNull: false },
        skills: { type: DataTypes.JSON, allowNull: false },
        parts: { type: DataTypes.JSON, allowNull: false },
        causes: { type: DataTypes.JSON, allowNull: false },
        duplicateOfId: DataTypes.UUID,
        windowFrom: DataTypes.DATE(3),
        windowTo: DataTypes.DATE(3),
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'calls' },
    );
  }
}
