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

/** Several properties with all their records in three statements, in the order of their names. */
export async function loadProperties(scope: Scope, ids: readonly string[]): Promise<StoredProperty[]> {
  if (!ids.length) return [];
  const { Property, SystemRecord, TariffRecord } = scope.models;
  const dated = { where: { propertyId: [...ids] }, order: [['fromDate', 'ASC'] as [string, string]], ...scope.within };
  const [properties, systems, tariffs] = await Promise.all([
    Property.findAll({ where: { id: [...ids] }, order: ['name', 'id'], ...scope.within }),
    SystemRecord.findAll(dated),
    TariffRecord.findAll(dated),
  ]);
  return properties.map((property) => ({
    ...property.get({ plain: true }),
    systems: ofProperty(systems, property.id),
    tariffs: ofProperty(tariffs, property.id),
  }));
}

function ofProperty<Content>(rows: { propertyId: string; fromDate: string; record: Content }[], id: string) {
  return rows.filter((row) => row.propertyId === id).map(({ fromDate, record }) => ({ ...record, from: fromDate }));
}

/** Locks the property's row until the transaction ends; false if there is none. */
export async function lockProperty(tx: Tx, id: string): Promise<boolean> {
  return (await tx.query('select from properties where id = $1 for update', [id])).length > 0;
}

export async function setDaySpan(tx: Tx, id: string, first: string | null, last: string | null): Promise<void> {
  await updateProperty(tx, id, { firstDay: first, lastDay: last });
}
