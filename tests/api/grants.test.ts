import { describe, expect, it } from 'vitest';
import type { Property, Role } from '../../shared/api/property.ts';
import { useApp } from '../support/app.ts';
import type { TestPerson } from '../support/app.ts';

const t = useApp();

const DAY = 24 * 3600 * 1000;
const instant = expect.stringMatching(/^\d{4}-\d\d-\d\dT[\d:.]+Z$/);
const grantsOf = async (person: TestPerson, id: string) =>
  (await person.agent.get(`/api/properties/${id}/grants`).expect(200)).body.grants as Record<string, unknown>[];
const sees = async (person: TestPerson, id: string) => (await person.agent.get(`/api/properties/${id}`)).status;
const may = async (person: TestPerson, id: string) => {
  const { mayEdit, mayUpload, maySeeTraces, mayGrant, mayConsent } = (
    await person.agent.get(`/api/properties/${id}`).expect(200)
  ).body as Property;
  return { mayEdit, mayUpload, maySeeTraces, mayGrant, mayConsent };
};
/** Lets a grant's time run out now. */
const runOut = (id: string, grant: string) =>
  t.db.query('update grants set ends_at = now() where property_id = $1 and id = $2', [id, grant.split('-')[1]]);
const give = (person: TestPerson, id: string, email: string, role: Role, more: object = {}) =>
  person.agent.post(`/api/properties/${id}/grants`).send({ email, role, ...more });

describe('POST /api/properties/:id/grants', () => {
  it('when a role is given, then it waits, gives no sight yet, and is answered alike for known and unknown addresses', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    const known = await give(owner, id, installer.email.toUpperCase(), 'installer');
    const unknown = await give(owner, id, 'nobody-knows@example.test', 'installer');
    const shape = (email: string) => ({
      id: expect.stringMatching(new RegExp(`^${id}-[a-z0-9]{8}$`)),
      role: 'installer',
      status: 'given',
      email,
      team: null,
      keeps: false,
      givenAt: instant,
      acceptedAt: null,
      from: instant,
      until: null,
      tracesConsent: null,
    });
    expect([known.status, known.body]).toEqual([201, shape(installer.email)]);
    expect([unknown.status, unknown.body]).toEqual([201, shape('nobody-knows@example.test')]);
    expect(await sees(installer, id)).toBe(404);
  });

  it('when the same is given again while it waits, then there is one, with the new dates', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const first = await give(owner, id, 'twice@example.test', 'installer').expect(201);
    const until = new Date(Date.now() + DAY).toISOString();
    const second = await give(owner, id, 'twice@example.test', 'installer', { until }).expect(201);
    expect(second.body).toEqual({ ...first.body, until });
    expect(await grantsOf(owner, id)).toHaveLength(2);
  });

  it.each([
    ['no address', { role: 'installer' }, 'email'],
    ['no e-mail address', { email: 'someone', role: 'installer' }, 'email'],
    ['a line break in the address', { email: 'a@example.test\r\nBcc: b@example.test', role: 'installer' }, 'email'],
    ['a role that does not exist', { email: 'a@example.test', role: 'administrator' }, 'role'],
    [
      'an end before its beginning',
      { email: 'a@example.test', role: 'installer', from: '2030-01-02T00:00:00Z', until: '2030-01-01T00:00:00Z' },
      'until',
    ],
    ['an end in the past', { email: 'a@example.test', role: 'installer', until: '2020-01-01T00:00:00Z' }, 'until'],
  ])('when it has %s, then 422 names the field', async (_what, body, path) => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const answer = await owner.agent.post(`/api/properties/${id}/grants`).send(body);
    expect(answer.status).toBe(422);
    expect(answer.body.errors.map((error: { path: string }) => error.path)).toEqual([path]);
    expect(await grantsOf(owner, id)).toHaveLength(1);
  });

  it('when an installer who does not keep the property gives one, then 403; one who keeps it may', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    await t.grant(owner, id, installer, 'installer');
    const answer = await give(installer, id, 'a@example.test', 'installer');
    expect(answer.status).toBe(403);
    expect(answer.body.detail).toContain('the team that keeps the property');
    const kept = await t.property(installer);
    await give(installer, kept.id, 'a@example.test', 'occupier').expect(201);
  });

  it('when a landlord adds an occupier to an occupied home, then 403: those who live there do', async () => {
    const landlord = await t.person('landlord');
    const occupier = await t.person();
    const { id } = await t.property(landlord);
    await t.grant(landlord, id, occupier, 'occupier');
    await give(landlord, id, 'second@example.test', 'occupier').expect(403);
    await give(occupier, id, 'second@example.test', 'occupier').expect(201);
  });
});

describe('GET /api/grants and POST /api/grants/:id/accept', () => {
  it('when a grant is accepted, then it holds from the next request, for a team that fits the role', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner, { name: 'Offered home' });
    const { body: given } = await give(owner, id, installer.email, 'installer').expect(201);
    const offer = {
      id: given.id,
      role: 'installer',
      property: { id, name: 'Offered home' },
      givenAt: given.givenAt,
      until: null,
    };
    expect((await installer.agent.get('/api/grants').expect(200)).body).toEqual({ offers: [offer] });
    const accept = () => installer.agent.post(`/api/grants/${given.id}/accept`).send({});
    const accepted = await accept();
    expect([accepted.status, accepted.body]).toEqual([200, offer]);
    expect(await sees(installer, id)).toBe(200);
    expect((await installer.agent.get('/api/grants')).body).toEqual({ offers: [] });
    expect((await accept()).status).toBe(200);
    const list = await grantsOf(owner, id);
    expect(list).toHaveLength(2);
    expect(list[1]).toMatchObject({
      id: given.id,
      status: 'accepted',
      acceptedAt: instant,
      team: expect.stringContaining('firm'),
    });
  });

  it('when the person has no team of that kind, then one is made; a team that is named is taken', async () => {
    const owner = await t.person();
    const person = await t.person('household');
    const { id } = await t.property(owner);
    const first = (await give(owner, id, person.email, 'installer')).body.id as string;
    await person.agent.post(`/api/grants/${first}/accept`).send({}).expect(200);
    const kinds = (await person.agent.get('/api/teams')).body.teams.map((team: { kind: string }) => team.kind);
    expect(kinds).toEqual(['household', 'firm']);
    const second = (await give(owner, id, person.email, 'occupier')).body.id as string;
    const foreign = await person.agent.post(`/api/grants/${second}/accept`).send({ teamId: owner.teamId });
    expect([foreign.status, foreign.body.errors[0].path]).toEqual([422, 'teamId']);
    await person.agent.post(`/api/grants/${second}/accept`).send({ teamId: person.teamId }).expect(200);
  });

  it('when someone else accepts or declines it, or it was withdrawn or ran out, then 404 and no sight', async () => {
    const owner = await t.person();
    const person = await t.person('firm');
    const other = await t.person('firm');
    const { id } = await t.property(owner);
    const accept = (who: TestPerson, grant: string) => who.agent.post(`/api/grants/${grant}/accept`).send({});
    const { body } = await give(owner, id, person.email, 'installer');
    await accept(other, body.id).expect(404);
    await other.agent.delete(`/api/grants/${body.id}`).expect(404);
    await accept(other, 'nonsense').expect(404);
    await accept(other, `${id}-aaaaaaaa`).expect(404);
    await owner.agent.delete(`/api/properties/${id}/grants/${body.id}`).expect(204);
    await accept(person, body.id).expect(404);
    const later = await give(owner, id, person.email, 'installer', { until: new Date(Date.now() + DAY).toISOString() });
    await runOut(id, later.body.id);
    await accept(person, later.body.id).expect(404);
    expect(await sees(person, id)).toBe(404);
    expect(await sees(other, id)).toBe(404);
  });

  it('when a landlord’s team would become the occupier too, then 409', async () => {
    const landlord = await t.person('landlord');
    const { id } = await t.property(landlord);
    const { body } = await give(landlord, id, landlord.email, 'occupier').expect(201);
    await landlord.agent.post(`/api/grants/${body.id}/accept`).send({ teamId: landlord.teamId }).expect(409);
  });
});

describe('what a role includes', () => {
  it('when the home has an occupier, an installer and a landlord, then each may what the role says', async () => {
    const occupier = await t.person();
    const installer = await t.person('firm');
    const landlord = await t.person('landlord');
    const { id } = await t.property(occupier);
    await t.grant(occupier, id, installer, 'installer');
    await t.grant(occupier, id, landlord, 'landlord');
    expect(await may(occupier, id)).toEqual({
      mayEdit: true,
      mayUpload: true,
      maySeeTraces: true,
      mayGrant: true,
      mayConsent: true,
    });
    expect(await may(installer, id)).toEqual({
      mayEdit: true,
      mayUpload: true,
      maySeeTraces: true,
      mayGrant: false,
      mayConsent: false,
    });
    expect(await may(landlord, id)).toEqual({
      mayEdit: true,
      mayUpload: true,
      maySeeTraces: false,
      mayGrant: true,
      mayConsent: false,
    });
  });

  it('when a member only reads in their team, then they see what the team sees and change nothing', async () => {
    const occupier = await t.person();
    const reader = await t.member(occupier, 'reader');
    const { id } = await t.property(occupier);
    expect(await may(reader, id)).toEqual({
      mayEdit: false,
      mayUpload: false,
      maySeeTraces: true,
      mayGrant: false,
      mayConsent: false,
    });
    await reader.agent.patch(`/api/properties/${id}`).send({ name: 'x' }).expect(403);
    await give(reader, id, 'a@example.test', 'installer').expect(403);
    await reader.agent.put(`/api/properties/${id}/consent`).send({ traces: true }).expect(403);
  });

  it('when a landlord keeps the property, then traces still need the occupier’s consent', async () => {
    const landlord = await t.person('landlord');
    const { id } = await t.property(landlord);
    expect((await may(landlord, id)).maySeeTraces).toBe(false);
  });

  it('when a landlord sends an installer in their own name, then that needs the consent too', async () => {
    const landlord = await t.person('landlord');
    const installer = await t.person('firm');
    const occupier = await t.person();
    const { id } = await t.property(landlord);
    await t.grant(landlord, id, installer, 'installer');
    expect((await may(installer, id)).maySeeTraces).toBe(false);
    await t.grant(landlord, id, occupier, 'occupier');
    await occupier.agent.put(`/api/properties/${id}/consent`).send({ traces: true }).expect(200);
    expect((await may(installer, id)).maySeeTraces).toBe(true);
  });
});

describe('PUT /api/properties/:id/consent', () => {
  it('when the occupier consents and takes it back, then the landlord sees traces in between only', async () => {
    const occupier = await t.person();
    const landlord = await t.person('landlord');
    const { id } = await t.property(occupier);
    await t.grant(occupier, id, landlord, 'landlord');
    const consent = (traces: boolean) => occupier.agent.put(`/api/properties/${id}/consent`).send({ traces });
    const given = await consent(true);
    expect([given.status, given.body]).toEqual([200, { traces: true }]);
    expect((await may(landlord, id)).maySeeTraces).toBe(true);
    expect((await grantsOf(occupier, id))[0]).toMatchObject({ role: 'occupier', tracesConsent: true });
    expect((await consent(false)).body).toEqual({ traces: false });
    expect((await may(landlord, id)).maySeeTraces).toBe(false);
  });

  it('when there are two occupiers, then both must consent', async () => {
    const first = await t.person();
    const second = await t.person();
    const landlord = await t.person('landlord');
    const { id } = await t.property(first);
    await t.grant(first, id, landlord, 'landlord');
    await first.agent.put(`/api/properties/${id}/consent`).send({ traces: true }).expect(200);
    await t.grant(first, id, second, 'occupier');
    expect((await may(landlord, id)).maySeeTraces).toBe(false);
    await second.agent.put(`/api/properties/${id}/consent`).send({ traces: true }).expect(200);
    expect((await may(landlord, id)).maySeeTraces).toBe(true);
  });

  it('when the occupier who consented leaves, then the consent leaves with them', async () => {
    const landlord = await t.person('landlord');
    const tenant = await t.person();
    const { id } = await t.property(landlord);
    const grant = await t.grant(landlord, id, tenant, 'occupier');
    await tenant.agent.put(`/api/properties/${id}/consent`).send({ traces: true }).expect(200);
    expect((await may(landlord, id)).maySeeTraces).toBe(true);
    await landlord.agent.delete(`/api/properties/${id}/grants/${grant}`).expect(204);
    expect((await may(landlord, id)).maySeeTraces).toBe(false);
  });

  it('when a landlord or an installer consents in the occupier’s stead, then 403', async () => {
    const occupier = await t.person();
    const installer = await t.person('firm');
    const landlord = await t.person('landlord');
    const { id } = await t.property(occupier);
    await t.grant(occupier, id, installer, 'installer');
    await t.grant(occupier, id, landlord, 'landlord');
    for (const who of [installer, landlord]) {
      const answer = await who.agent.put(`/api/properties/${id}/consent`).send({ traces: true });
      expect(answer.status).toBe(403);
      expect(answer.body.detail).toBe('Only the occupier can consent to traces.');
    }
  });
});

describe('DELETE /api/properties/:id/grants/:grantId', () => {
  it('when it is withdrawn, then the very next request is refused, and twice is once', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    const grant = await t.grant(owner, id, installer, 'installer');
    expect(await sees(installer, id)).toBe(200);
    await owner.agent.delete(`/api/properties/${id}/grants/${grant}`).expect(204);
    expect(await sees(installer, id)).toBe(404);
    expect((await installer.agent.get('/api/properties')).body).toEqual({ properties: [] });
    await owner.agent.delete(`/api/properties/${id}/grants/${grant}`).expect(204);
    expect((await grantsOf(owner, id))[1]).toMatchObject({ id: grant, status: 'withdrawn' });
  });

  it('when its time runs out, then the very next request is refused', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    const grant = await t.grant(owner, id, installer, 'installer', new Date(Date.now() + DAY));
    expect(await sees(installer, id)).toBe(200);
    await runOut(id, grant);
    expect((await grantsOf(owner, id))[1]).toMatchObject({ id: grant, status: 'ended' });
    expect(await sees(installer, id)).toBe(404);
  });

  it('when it has not begun yet, then it gives no sight', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    const { body } = await give(owner, id, installer.email, 'installer', {
      from: new Date(Date.now() + DAY).toISOString(),
    });
    await installer.agent.post(`/api/grants/${body.id}/accept`).send({}).expect(200);
    expect(await sees(installer, id)).toBe(404);
  });

  it('when an occupier ends the landlord’s, then 403; the landlord may end the occupier’s', async () => {
    const landlord = await t.person('landlord');
    const tenant = await t.person();
    const { id } = await t.property(landlord);
    const tenancy = await t.grant(landlord, id, tenant, 'occupier');
    const [first] = await grantsOf(landlord, id);
    const answer = await tenant.agent.delete(`/api/properties/${id}/grants/${String(first?.['id'])}`);
    expect(answer.status).toBe(403);
    expect(answer.body.detail).toContain('landlord');
    await landlord.agent.delete(`/api/properties/${id}/grants/${tenancy}`).expect(204);
    expect(await sees(tenant, id)).toBe(404);
  });

  it('when it is the last one without an end, then 409, also by the other way', async () => {
    const owner = await t.person();
    const installer = await t.person('firm');
    const { id } = await t.property(owner);
    await t.grant(owner, id, installer, 'installer', new Date(Date.now() + DAY));
    const [first] = await grantsOf(owner, id);
    const grant = String(first?.['id']);
    await owner.agent.delete(`/api/properties/${id}/grants/${grant}`).expect(409);
    await owner.agent.delete(`/api/grants/${grant}`).expect(409);
    expect(await sees(owner, id)).toBe(200);
  });

  it('when it belongs to another property or does not exist, then 404', async () => {
    const owner = await t.person();
    const other = await t.person();
    const mine = await t.property(owner);
    const theirs = await t.property(other);
    const [grant] = await grantsOf(other, theirs.id);
    await owner.agent.delete(`/api/properties/${mine.id}/grants/${String(grant?.['id'])}`).expect(404);
    await owner.agent.delete(`/api/properties/${mine.id}/grants/nonsense`).expect(404);
    expect(await sees(other, theirs.id)).toBe(200);
  });
});

describe('DELETE /api/grants/:id', () => {
  it('when the person declines an offer or gives up a grant, then 204, and twice is once', async () => {
    const owner = await t.person();
    const person = await t.person('firm');
    const { id } = await t.property(owner);
    const offer = (await give(owner, id, person.email, 'installer')).body.id as string;
    await person.agent.delete(`/api/grants/${offer}`).expect(204);
    await person.agent.delete(`/api/grants/${offer}`).expect(204);
    expect((await person.agent.get('/api/grants')).body).toEqual({ offers: [] });
    const held = await t.grant(owner, id, person, 'installer');
    await person.agent.delete(`/api/grants/${held}`).expect(204);
    expect(await sees(person, id)).toBe(404);
  });

  it('when a reader of the team gives it up, then 404 and it stays', async () => {
    const owner = await t.person();
    const firm = await t.person('firm');
    const reader = await t.member(firm, 'reader');
    const { id } = await t.property(owner);
    const grant = await t.grant(owner, id, firm, 'installer');
    await reader.agent.delete(`/api/grants/${grant}`).expect(404);
    expect(await sees(firm, id)).toBe(200);
  });
});
