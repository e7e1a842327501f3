import type { Scope, Tx } from '../database/connection.ts';

export async function insertEntry(
  tx: Tx,
  propertyId: string,
  personId: string | null,
  act: string,
  about: Record<string, unknown>,
): Promise<void> {
  await tx.query('insert into trail (property_id, person_id, act, about) values ($1, $2, $3, $4::jsonb)', [
    propertyId,
    personId,
    act,
    JSON.stringify(about),
  ]);
}

export function entriesOf(scope: Scope, propertyId: string, limit: number) {
  return scope.query<{ at: Date; who: string | null; act: string; about: Record<string, unknown> }>(
    `select trail.at, people.name as who, trail.act, trail.about
     from trail left join people on people.id = trail.person_id
     where trail.property_id = $1 order by trail.id desc limit $2`,
    [propertyId, limit],
  );
}
