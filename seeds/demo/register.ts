import type { Actor } from '../../src/lib/access/access';
import type { Container } from '../../src/lib/server/container';
import { hashPassword } from '../../src/lib/server/auth/password';
import { withTransaction } from '../../src/lib/server/db/database';
import { addPerson, addPractice } from '../../src/lib/server/services/practice-setup';
import { certificatePdf } from './certificate-pdf';
import type { StoryClock } from './clock';
import { CLIENTS, DEMO_PASSWORD, PRACTICE, STAFF, type ClientKey, type StaffKey } from './people';
import { demoInputs, SENSORS, type DemoSensor } from './sensors';
import { INSTRUMENTS, POINTS, SITES, type PointKey } from './sites';

export interface DemoRegister {
	staff: Record<StaffKey, Actor>;
	clientPeople: Record<ClientKey, Actor>;
	points: Record<PointKey, string>;
	instruments: string[];
}

const mapKeys = async <K extends string, V, R>(
	record: Record<K, V>,
	make: (value: V, key: K) => Promise<R>
) => {
	const made = {} as Record<K, R>;
	for (const key of Object.keys(record) as K[]) made[key] = await make(record[key], key);
	return made;
};

const isoDay = (date: Date): string => date.toISOString().slice(0, 10);

/** The practice, its people, clients, sites, points and instruments. */
export async function registerDemo(
	container: Container,
	story: StoryClock,
	today: Date
): Promise<DemoRegister> {
	const { db, services } = container;
	const now = story.at(400, 9);
	const passwordHash = await hashPassword(DEMO_PASSWORD);
	const practiceId = await withTransaction(db, (trx) => addPractice(trx, PRACTICE, now));

	const actorOf = async (
		person: { name: string; email: string; role: Actor['role'] },
		clientId: string | null
	) => {
		const ids = await withTransaction(db, (trx) =>
			addPerson(trx, { ...person, practiceId, clientId, passwordHash }, now)
		);
		return { ...ids, ...person, practiceId, practiceName: PRACTICE.name, clientId } satisfies Actor;
	};
	const staff = await mapKeys(STAFF, (person) => actorOf(person, null));
	const owner = staff.holloway;

	const clientIds = await mapKeys(CLIENTS, (client) =>
		services.register.createClient(owner, {
			name: client.name,
			contactName: client.person.name,
			contactEmail: client.person.email,
			contactPhone: client.person.phone,
			address: client.address,
			notes: ''
		})
	);
	const clientPeople = await mapKeys(CLIENTS, (client, key) =>
		actorOf({ name: client.person.name, email: client.person.email, role: 'client' }, clientIds[key])
	);

	const site = (client: ClientKey, facts: (typeof SITES)[keyof typeof SITES]) =>
		services.register.createSite(owner, clientIds[client], facts);
	const siteIds = {
		bellwether: await site('bellwether', SITES.harrowDock),
		kestrel: await site('kestrel', SITES.kestrelRow),
		ostler: await site('ostler', SITES.ostlerLane),
		fennimore: await site('fennimore', SITES.fennimore)
	};
	const point = async (client: ClientKey, key: PointKey) => {
		const { limitSetKey, ...facts } = POINTS[key];
		const limitSet = await db('limit_sets').where({ key: limitSetKey }).whereNull('practice_id').first('id');
		return services.register.createPoint(owner, clientIds[client], siteIds[client], {
			...facts,
			limitSetId: limitSet?.id ?? null
		});
	};
	const points = {
		harrowMain: await point('bellwether', 'harrowMain'),
		harrowPanel: await point('bellwether', 'harrowPanel'),
		kestrelLv: await point('kestrel', 'kestrelLv'),
		ostlerIntake: await point('ostler', 'ostlerIntake'),
		fennimoreIntake: await point('fennimore', 'fennimoreIntake')
	};

	const dayFromToday = (days: number): string => isoDay(new Date(today.getTime() + days * 86_400_000));
	const certify = async (
		subject: { instrumentId: string } | { sensorId: string },
		item: {
			what: string;
			serialNumber: string;
			calibratedDaysAgo: number;
			dueInDays: number;
			certificate: string;
		}
	) => {
		const madeAt = story.at(item.calibratedDaysAgo - 2, 9);
		const days = {
			calibratedOn: dayFromToday(-item.calibratedDaysAgo),
			dueOn: dayFromToday(item.dueInDays)
		};
		await services.calibrations.add(
			owner,
			subject,
			{
				certificateNumber: item.certificate,
				laboratory: 'Calder Metrology (invented)',
				note: '',
				...days
			},
			{ name: `${item.certificate}.pdf`, bytes: await certificatePdf({ ...item, ...days, madeAt }) }
		);
	};
	const registerSensors = async (sensors: readonly DemoSensor[]): Promise<string[]> => {
		const ids: string[] = [];
		for (const sensor of sensors) {
			const id = await services.sensors.create(owner, sensor.facts);
			await certify(
				{ sensorId: id },
				{ ...sensor, what: sensor.facts.name, serialNumber: sensor.facts.serialNumber }
			);
			ids.push(id);
		}
		return ids;
	};

	const instruments: string[] = [];
	const plugged = [await registerSensors(SENSORS.recorder2), await registerSensors(SENSORS.recorder5)];
	await registerSensors(SENSORS.spare);
	for (const [i, instrument] of INSTRUMENTS.entries()) {
		story.at(instrument.calibratedDaysAgo - 2, 9);
		const { facts } = instrument;
		const inputs = demoInputs(instrument.resolution_bits, plugged[i] ?? []);
		const id = await services.instruments.create(owner, { ...facts, inputs });
		await certify(
			{ instrumentId: id },
			{ ...instrument, what: `${facts.name}, ${facts.model}`, serialNumber: facts.serialNumber }
		);
		instruments.push(id);
	}
	return { staff, clientPeople, points, instruments };
}
