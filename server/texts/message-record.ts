import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { MESSAGE_STATES, type MessageDto } from '@shared/contract/messages';

/** One row of `messages`: a text to or from a customer, and the outbox that it leaves through. */
export class MessageRecord extends Model<
  InferAttributes<MessageRecord>,
  InferCreationAttributes<MessageRecord>
> {
  declare id: string;
  declare stormId: CreationOptional<string | null>;
  declare callId: CreationOptional<string | null>;
  declare phone: string;
  declare direction: 'out' | 'in';
  declare body: string;
  declare state: MessageDto['state'];
  declare milestone: CreationOptional<string | null>;
  declare dedupeKey: CreationOptional<string | null>;
  declare segments: CreationOptional<number>;
  declare at: Date;
  declare dueAt: Date;
  declare attempts: CreationOptional<number>;
  declare claimToken: CreationOptional<string | null>;
  declare claimUntil: CreationOptional<Date | null>;
  declare providerSid: CreationOptional<string | null>;
  declare trouble: CreationOptional<string | null>;
  declare readAt: CreationOptional<Date | null>;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    MessageRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: DataTypes.UUID,
        callId: DataTypes.UUID,
        phone: { type: DataTypes.STRING(16), allowNull: false },
        direction: { type: DataTypes.ENUM('out', 'in'), allowNull: false },
        body: { type: DataTypes.STRING(1600), allowNull: false },
        state: { type: DataTypes.ENUM(...MESSAGE_STATES), allowNull: false },
        milestone: DataTypes.STRING(40),
        dedupeKey: DataTypes.STRING(120),
        segments: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        at: { type: DataTypes.DATE(3), allowNull: false },
        dueAt: { type: DataTypes.DATE(3), allowNull: false },
        attempts: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        claimToken: DataTypes.UUID,
        claimUntil: DataTypes.DATE(3),
        providerSid: DataTypes.STRING(40),
        trouble: DataTypes.STRING(300),
        readAt: DataTypes.DATE(3),
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'messages' },
    );
  }
}
