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
		// Greatest rms value that the input takes, in V or A at the input.
		t.double('range_rms');
		t.integer('resolution_bits');
		t.text('sensor_id').references('sensors.id');
		t.index(['practice_id', 'instrument_id', 'position']);
	});

	await knex.schema.alterTable('calibrations', (t) => {
		// The sensor that was calibrated; null when it was the instrument itself.
		t.text('sensor_id').references('sensors.id');
		t.text('certificate_sha256').references('stored_files.sha256');
		t.text('certificate_file_name');
		t.text('note').notNullable().defaultTo('');
	});
}

export async function down(knex: Knex): Promise<void> {
	await knex('calibrations').whereNotNull('sensor_id').delete();
	await knex.schema.alterTable('calibrations', (t) => {
		t.dropForeign(['sensor_id']);
		t.dropForeign(['certificate_sha256']);
	});
	await knex.schema.alterTable('calibrations', (t) =>
		t.dropColumns('sensor_id', 'certificate_sha256', 'certificate_file_name', 'note')
	);
	await knex.schema.dropTable('instrument_channels');
	await knex.schema.dropTable('sensors');
}
