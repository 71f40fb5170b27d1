import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import {
  COMPARTMENT_KINDS,
  COMPRESSOR_STARTS,
  COOLING_NOW,
  RAN_BETWEEN,
  UNIT_KINDS,
  type CompartmentFacts,
  type CompartmentKind,
  type CompressorStart,
  type CoolingNow,
  type RanBetween,
  type UnitKind,
} from '@shared/domain/cold-unit';

/** One row of `cold_units`. */
export class ColdUnitRecord extends Model<
  InferAttributes<ColdUnitRecord>,
  InferCreationAttributes<ColdUnitRecord>
> {
  declare id: string;
  declare callId: string;
  declare placeNo: number;
  declare kind: UnitKind;
  declare compressorStart: CompressorStart;
  declare ageYears: CreationOptional<number | null>;
  declare cubicFeet: CreationOptional<number | null>;
  declare place: string;
  declare cooling: CoolingNow;
  declare ranBetween: RanBetween;

  static register(sequelize: Sequelize): void {
    ColdUnitRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        callId: { type: DataTypes.UUID, allowNull: false },
        placeNo: { type: DataTypes.INTEGER, allowNull: false },
        kind: { type: DataTypes.ENUM(...UNIT_KINDS), allowNull: false },
        compressorStart: { type: DataTypes.ENUM(...COMPRESSOR_STARTS), allowNull: false },
        ageYears: DataTypes.INTEGER,
        cubicFeet: DataTypes.DOUBLE,
        place: { type: DataTypes.STRING(60), allowNull: false },
        cooling: { type: DataTypes.ENUM(...COOLING_NOW), allowNull: false },
        ranBetween: { type: DataTypes.ENUM(...RAN_BETWEEN), allowNull: false },
      },
      { sequelize, tableName: 'cold_units' },
    );
  }
}

/** One row of `compartments`: the facts as told, and the clock worked out from them. */
export class CompartmentRecord extends Model<
  InferAttributes<CompartmentRecord>,
  InferCreationAttributes<CompartmentRecord>
> {
  declare unitId: string;
  declare placeNo: number;
  declare kind: CompartmentKind;
  declare facts: CompartmentFacts;
  declare valueCents: number;
  declare atRiskAt: Date;
  declare saveByAt: CreationOptional<Date | null>;
  declare earliestAt: Date;
  declare likelyAt: CreationOptional<Date | null>;
  declare reasons: string[];

  static register(sequelize: Sequelize): void {
    CompartmentRecord.init(
      {
        unitId: { type: DataTypes.UUID, primaryKey: true },
        placeNo: { type: DataTypes.INTEGER, primaryKey: true },
        kind: { type: DataTypes.ENUM(...COMPARTMENT_KINDS), allowNull: false },
        facts: { type: DataTypes.JSON, allowNull: false },
        valueCents: { type: DataTypes.INTEGER, allowNull: false },
        atRiskAt: { type: DataTypes.DATE(3), allowNull: false },
        saveByAt: DataTypes.DATE(3),
        earliestAt: { type: DataTypes.DATE(3), allowNull: false },
        likelyAt: DataTypes.DATE(3),
        reasons: { type: DataTypes.JSON, allowNull: false },
      },
      { sequelize, tableName: 'compartments' },
    );
  }
}
