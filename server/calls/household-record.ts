import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { ADDRESS_KINDS, type Address } from '@shared/contract/calls';

/** One row of `households`: whoever answers at a phone number, across storms. */
export class HouseholdRecord extends Model<
  InferAttributes<HouseholdRecord>,
  InferCreationAttributes<HouseholdRecord>
> {
  declare id: string;
  declare phone: string;
  declare name: string;
  declare addressText: string;
  declare unitNo: string;
  declare lon: CreationOptional<number | null>;
  declare lat: CreationOptional<number | null>;
  declare addressKind: Address['kind'];
  declare language: 'en' | 'es';
  declare mayText: boolean;

  address(): Address {
    return {
      text: this.addressText,
      unitNo: this.unitNo,
      lonLat: this.lon === null || this.lat === null ? null : [this.lon, this.lat],
      kind: this.addressKind,
    };
  }

  static register(sequelize: Sequelize): void {
    HouseholdRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        phone: { type: DataTypes.STRING(16), allowNull: false },
        name: { type: DataTypes.STRING(120), allowNull: false },
        addressText: { type: DataTypes.STRING(160), allowNull: false },
        unitNo: { type: DataTypes.STRING(24), allowNull: false },
        lon: DataTypes.DOUBLE,
        lat: DataTypes.DOUBLE,
        addressKind: { type: DataTypes.ENUM(...ADDRESS_KINDS), allowNull: false },
        language: { type: DataTypes.ENUM('en', 'es'), allowNull: false },
        mayText: { type: DataTypes.BOOLEAN, allowNull: false },
      },
      { sequelize, tableName: 'households' },
    );
  }
}
