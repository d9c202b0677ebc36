import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('sites', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('name').notNullable();
		t.text('address').notNullable().defaultTo('');
		t.text('utility').notNullable().defaultTo('');
		// IANA zone: local days and weeks of every statistic are those of the site.
		t.text('time_zone').notNullable();
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('archived_at');
		t.index(['practice_id', 'client_id', 'name']);
	});

	await knex.schema.createTable('points', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('site_id').notNullable().references('sites.id');
		t.text('name').notNullable();
		t.text('kind').notNullable().checkIn(['pcc', 'in-plant']);
		t.text('system').notNullable().checkIn(['single-phase', 'split-phase', 'three-wire', 'four-wire']);
		t.double('nominal_voltage_v').notNullable();
		t.integer('nominal_frequency_hz').notNullable().checkIn(['50', '60']);
		// How I_L and I_sc were obtained, as entered; the amperes are computed from it in one place.
		t.text('demand_json').notNullable();
		t.text('short_circuit_json').notNullable();
		t.text('phase_names_json').notNullable();
		t.double('ct_primary_a');
		t.double('ct_secondary_a');
		t.double('vt_primary_v');
		t.double('vt_secondary_v');
		t.integer('limit_set_id').references('limit_sets.id');
		t.text('limit_set_reason').notNullable().defaultTo('');
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.text('archived_at');
		t.index(['practice_id', 'site_id', 'name']);
	});

	await knex.schema.createTable('instruments', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('name').notNullable();
		t.text('model').notNullable().defaultTo('');
		t.text('serial_number').notNullable().defaultTo('');
		// IEC 61000-4-7 instrument class of harmonic accuracy.
		t.text('harmonic_class').notNullable().checkIn(['I', 'II', 'unknown']);
		t.text('channels').notNullable().defaultTo('');
		t.text('sensors').notNullable().defaultTo('');
		t.double('current_sensor_error_pct');
		t.double('voltage_sensor_error_pct');
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('archived_at');
		t.index(['practice_id', 'name']);
	});

	await knex.schema.createTable('calibrations', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('instrument_id').notNullable().references('instruments.id');
		t.text('certificate_number').notNullable();
		t.text('laboratory').notNullable().defaultTo('');
		t.text('calibrated_on').notNullable();
		t.text('due_on').notNullable();
		t.text('created_at').notNullable();
		t.index(['practice_id', 'instrument_id', 'due_on']);
	});

	await knex.schema.createTable('surveys', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('site_id').notNullable().references('sites.id');
		t.text('point_id').notNullable().references('points.id');
		// e.g. "S-0142", counted per practice.
		t.text('number').notNullable();
		t.text('title').notNullable();
		t.text('status').notNullable().defaultTo('open').checkIn(['open', 'closed']);
		t.text('engineer_id').notNullable().references('users.id');
		t.text('instrument_id').references('instruments.id');
		t.text('decision_rule').notNullable().defaultTo('guarded').checkIn(['guarded', 'simple']);
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.unique(['practice_id', 'number']);
		t.index(['practice_id', 'status', 'updated_at']);
		t.index(['practice_id', 'point_id']);
	});

	await knex.schema.createTable('number_sequences', (t) => {
		t.text('practice_id').notNullable().references('practices.id');
		// "survey", or "report:2026".
		t.text('name').notNullable();
		t.integer('last_value').notNullable();
		t.primary(['practice_id', 'name']);
	});
}

export async function down(knex: Knex): Promise<void> {
	for (const table of ['number_sequences', 'surveys', 'calibrations', 'instruments', 'points', 'sites']) {
		await knex.schema.dropTable(table);
	}
}
