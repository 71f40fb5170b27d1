import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { StormRoadShape } from '@shared/contract/storm-roads';
import { STORM_ROAD_KINDS, type StormRoadKind } from '@shared/domain/roads/conditions';
import {
  STORM_ROAD_STATES,
  type StandingStormRoad,
  type StormRoadState,
} from '@shared/domain/storm-roads';

/** What a storm road was before a change; `null`: it was not there. */
export type EarlierRoad =
  (Omit<StandingStormRoad, 'id'> & { readonly name: string; readonly notes: string }) | null;

/** One row of `storm_roads`. */
export class StormRoadRecord extends Model<
  InferAttributes<StormRoadRecord>,
  InferCreationAttributes<StormRoadRecord>
> {
  declare id: string;
  declare stormId: string;
  declare kind: StormRoadKind;
  declare state: StormRoadState;
  declare name: string;
  declare notes: string;
  /** As JSON text. */
  declare shape: string;
  declare startsAt: Date;
  declare endsAt: CreationOptional<Date | null>;
  declare speedShare: CreationOptional<number | null>;
  declare madeBy: string;
  declare madeAt: Date;
  declare liftedAt: CreationOptional<Date | null>;
  /** Its latest changes, newest last, as JSON text. */
  declare earlier: string;
  declare version: CreationOptional<number>;

  drawn(): StormRoadShape {
    return JSON.parse(this.shape) as StormRoadShape;
  }

  changes(): EarlierRoad[] {
    return JSON.parse(this.earlier) as EarlierRoad[];
  }

  toDomain(): StandingStormRoad & { readonly version: number } {
    return {
      id: this.id,
      kind: this.kind,
      state: this.state,
      shape: this.drawn(),
      startsAt: this.startsAt.getTime(),
      endsAt: this.endsAt?.getTime() ?? null,
      speedShare: this.speedShare ?? null,
      version: this.version,
    };
  }

  static register(sequelize: Sequelize): void {
    StormRoadRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        stormId: { type: DataTypes.UUID, allowNull: false },
        kind: { type: DataTypes.ENUM(...STORM_ROAD_KINDS), allowNull: false },
        state: { type: DataTypes.ENUM(...STORM_ROAD_STATES), allowNull: false },
        name: { type: DataTypes.STRING(80), allowNull: false },
        notes: { type: DataTypes.STRING(500), allowNull: false },
        shape: { type: DataTypes.TEXT('medium'), allowNull: false },
        startsAt: { type: DataTypes.DATE(3), allowNull: false },
        endsAt: DataTypes.DATE(3),
        speedShare: DataTypes.DOUBLE,
        madeBy: { type: DataTypes.STRING(80), allowNull: false },
        madeAt: { type: DataTypes.DATE(3), allowNull: false },
        liftedAt: DataTypes.DATE(3),
        earlier: { type: DataTypes.TEXT('medium'), allowNull: false },
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'storm_roads' },
    );
  }
}
