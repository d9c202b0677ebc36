import type { Knex } from 'knex';

/** Sensors as things of their own, the inputs of an instrument, and certificates with their files. */
export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('sensors', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('name').notNullable();
		t.text('kind')
			.notNullable()
			.checkIn([
				'current-transformer',
				'clamp',
				'flexible-coil',
				'shunt',
				'voltage-transformer',
				'voltage-lead'
			]);
		t.text('serial_number').notNullable().defaultTo('');
		// Nominal ratio as marked: primary to secondary, each in its own unit (A, V or mV).
		t.double('ratio_primary');
		t.double('ratio_secondary');
		t.text('secondary_unit').notNullable().defaultTo('A').checkIn(['A', 'V', 'mV']);
		// e.g. "0.5" (IEC 61869-2) or "3"; as marked.
		t.text('accuracy_class').notNullable().defaultTo('');
		t.double('ratio_error_pct');
		t.double('phase_error_deg');
		t.double('highest_frequency_hz');
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('archived_at');
		t.index(['practice_id', 'name']);
	});

	await knex.schema.createTable('instrument_channels', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('instrument_id').notNullable().references('instruments.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('name').notNullable();
		t.text('quantity').notNullable().checkIn(['voltage', 'current']);
		// Greatest rms value that the input takes, at the input itself: V at a current input where a sensor gives volts.
		t.double('range_rms');
		t.text('range_unit').notNullable().defaultTo('V').checkIn(['A', 'V']);
		t.integer('resolution_bits');
		t.text('sensor_id').references('sensors.id');
		t.index(['practice_id', 'instrument_id', 'position']);
	});

	await remakeCalibrations(knex, true);
}

/** Made anew because a certificate may now be a sensor's alone; nothing refers to the table. */
async function remakeCalibrations(knex: Knex, extended: boolean): Promise<void> {
	await knex.schema.createTable('calibrations_new', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		const instrument = t.text('instrument_id').references('instruments.id');
		if (!extended) instrument.notNullable();
		t.text('certificate_number').notNullable();
		t.text('laboratory').notNullable().defaultTo('');
		t.text('calibrated_on').notNullable();
		t.text('due_on').notNullable();
		t.text('created_at').notNullable();
		if (extended) {
			t.text('sensor_id').references('sensors.id');
			t.text('certificate_sha256').references('stored_files.sha256');
			t.text('certificate_file_name');
			t.text('note').notNullable().defaultTo('');
			t.check(
				'(instrument_id is null) <> (sensor_id is null)',
				[],
				'calibrations_of_an_instrument_or_a_sensor'
			);
		}
	});
	const columns =
		'id, practice_id, instrument_id, certificate_number, laboratory, calibrated_on, due_on, created_at';
	await knex.raw(`insert into calibrations_new (${columns}) select ${columns} from calibrations`);
	await knex.schema.dropTable('calibrations');
	await knex.schema.renameTable('calibrations_new', 'calibrations');
	await knex.schema.alterTable('calibrations', (t) => {
		t.index(['practice_id', 'instrument_id', 'due_on']);
		if (extended) t.index(['practice_id', 'sensor_id', 'due_on']);
	});
}

/** Certificates of sensors have no place in the earlier schema and go. */
export async function down(knex: Knex): Promise<void> {
	await knex('calibrations').whereNull('instrument_id').delete();
	await remakeCalibrations(knex, false);
	await knex.schema.dropTable('instrument_channels');
	await knex.schema.dropTable('sensors');
}
