import type { Sequelize } from 'sequelize';
import { AreaRecord } from '../areas/area-record';
import { CallRecord } from '../calls/call-record';
import { ColdUnitRecord, CompartmentRecord } from '../calls/cold-unit-record';
import { HouseholdRecord } from '../calls/household-record';
import { NightLogRecord, NightLogRowRecord } from '../night-log/night-log-record';
import { PlanRecord, StopRecord } from '../routes/stop-record';
import { UserRecord } from '../staff/user-record';
import { StormRoadRecord } from '../storm-roads/storm-road-record';
import { StormRecord } from '../storms/storm-record';
import { ShiftRecord, TechnicianRecord } from '../technicians/technician-record';
import { MessageRecord } from '../texts/message-record';

/** Tells Sequelize of every record. The tables themselves come from the migrations alone. */
export function registerRecords(sequelize: Sequelize): void {
  const records = [
    StormRecord,
    UserRecord,
    TechnicianRecord,
    ShiftRecord,
    AreaRecord,
    StormRoadRecord,
    HouseholdRecord,
    CallRecord,
    ColdUnitRecord,
    CompartmentRecord,
    PlanRecord,
    StopRecord,
    MessageRecord,
    NightLogRecord,
    NightLogRowRecord,
  ];
  for (const record of records) record.register(sequelize);
}
