import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { AreaShape } from '@shared/contract/areas';

/** One row of `areas`. */
export class AreaRecord extends Model<
  InferAttributes<AreaRecord>,
  InferCreationAttributes<AreaRecord>
> {
  declare id: string;
  declare stormId: string;
  declare name: string;
  /** The coordinates of a MultiPolygon, as JSON text. */
  declare shape: string;
  declare outAt: Date;
  declare backAt: CreationOptional<Date | null>;
  declare version: CreationOptional<number>;

  ground(): AreaShape {
    return JSON.parse(this.shape) as AreaShape;
  }

  static register(sequelize: Sequelize): void {
    AreaRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        name: { type: DataTypes.STRING(80), allowNull: false },
        shape: { type: DataTypes.TEXT('medium'), allowNull: false },
        outAt: { type: DataTypes.DATE(3), allowNull: false },
        backAt: DataTypes.DATE(3),
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'areas' },
    );
  }
}
