import type { Attributes, CreationAttributes } from 'sequelize';
import type { DatedSystem, DatedTariff, System, Tariff } from '../../shared/api/property.ts';
import type { Scope, Tx } from '../database/connection.ts';
import type { PropertyRow } from '../database/models/properties.ts';

export type PropertyFields = Attributes<PropertyRow>;

/** A property with every record, oldest first. */
export interface StoredProperty extends PropertyFields {
  systems: DatedSystem[];
  tariffs: DatedTariff[];
}

export async function insertProperty(tx: Tx, fields: CreationAttributes<PropertyRow>): Promise<void> {
  await tx.models.Property.create(fields, tx.within);
}

export async function updateProperty(tx: Tx, id: string, fields: Partial<PropertyFields>): Promise<void> {
  await tx.models.Property.update(fields, { where: { id }, ...tx.within });
}

/** A record of the same day is replaced. */
export async function putSystem(tx: Tx, propertyId: string, fromDate: string, record: System, createdBy: string) {
  await tx.models.SystemRecord.upsert({ propertyId, fromDate, record, createdBy }, tx.within);
}

export async function putTariff(tx: Tx, propertyId: string, fromDate: string, record: Tariff, createdBy: string) {
  await tx.models.TariffRecord.upsert({ propertyId, fromDate, record, createdBy }, tx.within);
}

const RECORDS = (table: 'system_records' | 'tariffs') => `
  coalesce((select jsonb_agg(r.record || jsonb_build_object('from', r.from_date) order by r.from_date)
    from ${table} r where r.property_id = p.id), '[]')`;

/** Several properties with all their records, in the order of their names. */
export function loadProperties(scope: Scope, ids: readonly string[]): Promise<StoredProperty[]> {
  if (!ids.length) return Promise.resolve([]);
  return scope.query<StoredProperty>(
    `select p.id, p.name, p.time_zone as "timeZone", p.country, p.latitude, p.longitude, p.ready_time as "readyTime",
       p.ready_temperature_c as "readyTemperatureC", p.team_id as "teamId", p.demo, p.first_day as "firstDay",
       p.last_day as "lastDay", p.created_by as "createdBy", p.created_at as "createdAt",
       ${RECORDS('system_records')} as systems, ${RECORDS('tariffs')} as tariffs
     from properties p where p.id = any($1) order by p.name, p.id`,
    [ids],
  );
}

/** Locks the property's row until the transaction ends; false if there is none. */
export async function lockProperty(tx: Tx, id: string): Promise<boolean> {
  return (await tx.query('select from properties where id = $1 for update', [id])).length > 0;
}

export async function setDaySpan(tx: Tx, id: string, first: string | null, last: string | null): Promise<void> {
  await updateProperty(tx, id, { firstDay: first, lastDay: last });
}
