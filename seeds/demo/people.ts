/**
 * The demo practice and its people. All invented: names, firms and addresses belong to nobody.
 * The `.example` names follow RFC 2606, so that a mail sent by mistake reaches no one.
 */
export const DEMO_PASSWORD = 'copper and its oxides';

export const PRACTICE = {
	name: 'Tarn & Holloway Power Engineers',
	shortName: 'Tarn & Holloway',
	reportPrefix: 'TH',
	address: '3 Weighbridge Lane, Calder Wharf',
	email: 'office@tarn-holloway.example',
	phone: '+44 1632 960 410',
	timeZone: 'Europe/London',
	relianceStatement:
		'This report is for the named client and its electricity supplier. It states what was measured at the point, over the period and with the instruments described, and nothing beyond that.'
};

export type StaffKey = 'holloway' | 'adeyemi' | 'tarn' | 'brandt';
export const STAFF: Record<
	StaffKey,
	{ name: string; email: string; role: 'owner' | 'engineer' | 'checker' }
> = {
	holloway: { name: 'Judith Holloway', email: 'judith.holloway@example.com', role: 'owner' },
	adeyemi: { name: 'Mina Adeyemi', email: 'mina.adeyemi@example.com', role: 'engineer' },
	tarn: { name: 'Piers Tarn', email: 'piers.tarn@example.com', role: 'checker' },
	brandt: { name: 'Owen Brandt', email: 'owen.brandt@example.com', role: 'engineer' }
};

export type ClientKey = 'bellwether' | 'kestrel' | 'ostler' | 'fennimore';
export const CLIENTS: Record<
	ClientKey,
	{ name: string; address: string; person: { name: string; email: string; phone: string } }
> = {
	bellwether: {
		name: 'Bellwether Cold Store',
		address: '18 Harrow Dock Road, Port Ansel',
		person: { name: 'Rosa Castellane', email: 'rosa.castellane@example.com', phone: '+1 555 0142' }
	},
	kestrel: {
		name: 'Kestrel Row Data Hall',
		address: '1 Kestrel Row, Thornby',
		person: { name: 'Ines Okafor', email: 'ines.okafor@example.com', phone: '+44 1632 960 227' }
	},
	ostler: {
		name: 'Ostler Lane Print Works',
		address: '77 Ostler Lane, Marrow Falls',
		person: { name: 'Walt Dunmore', email: 'walt.dunmore@example.com', phone: '+1 555 0177' }
	},
	fennimore: {
		name: "Fennimore Children's Hospital",
		address: 'Fennimore Park, Aldersea',
		person: { name: 'Hester Lindqvist', email: 'hester.lindqvist@example.com', phone: '+44 1632 960 881' }
	}
};
