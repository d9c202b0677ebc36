/** People of the two practices that the browser tests know. Invented. */
export const PASSWORD = 'a password for tests only';

export const ALDER = {
	practice: { name: 'Alder Measurement', shortName: 'Alder', reportPrefix: 'AM', timeZone: 'Europe/Berlin' },
	owner: { name: 'Greta Alder', email: 'greta@alder.example' },
	engineer: { name: 'Tom Engelhart', email: 'tom@alder.example' },
	checker: { name: 'Ruth Checkland', email: 'ruth@alder.example' },
	clientPerson: { name: 'Sam Portman', email: 'sam@millbrook.example' }
};

/** A second practice, which must see nothing of the first. */
export const BIRCH = {
	practice: { name: 'Birch & Partners', shortName: 'Birch', reportPrefix: 'BP', timeZone: 'Europe/Berlin' },
	owner: { name: 'Bea Birch', email: 'bea@birch.example' },
	client: { name: 'Fernside Laundry' },
	clientPerson: { name: 'Ola Fern', email: 'ola@fernside.example' }
};
