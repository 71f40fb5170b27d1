import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** One row of `storms`. */
export class StormRecord extends Model<
  InferAttributes<StormRecord>,
  InferCreationAttributes<StormRecord>
> {
  declare id: string;
  declare name: string;
  declare state: CreationOptional<'open' | 'closed'>;
  declare openedAt: Date;
  declare closedAt: CreationOptional<Date | null>;
  /** How many calls the storm has had; the next call's number is one more. */
  declare callsTaken: CreationOptional<number>;
  declare planEpoch: CreationOptional<number>;
  /** Names the road conditions that the routes in force are timed by; empty until any were. */
  declare roadsKey: CreationOptional<string>;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    StormRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        name: { type: DataTypes.STRING(80), allowNull: false },
        state: { type: DataTypes.ENUM('open', 'closed'), allowNull: false, defaultValue: 'open' },
        openedAt: { type: DataTypes.DATE(3), allowNull: false },
        closedAt: DataTypes.DATE(3),
        callsTaken: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        planEpoch: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        roadsKey: { type: DataTypes.STRING(64), allowNull: false, defaultValue: '' },
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'storms' },
    );
  }
}
