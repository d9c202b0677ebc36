import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('practices', (t) => {
		t.text('id').primary();
		t.text('name').notNullable();
		t.text('short_name').notNullable();
		// First part of every report number, e.g. "TH" in TH-2026-0142.
		t.text('report_prefix').notNullable();
		t.text('address').notNullable().defaultTo('');
		t.text('email').notNullable().defaultTo('');
		t.text('phone').notNullable().defaultTo('');
		t.text('time_zone').notNullable().defaultTo('UTC');
		t.text('paper').notNullable().defaultTo('A4').checkIn(['A4', 'LETTER']);
		t.text('phase_names_json').notNullable();
		t.boolean('allow_self_check').notNullable().defaultTo(false);
		t.text('reliance_statement').notNullable().defaultTo('');
		t.text('created_at').notNullable();
	});

	await knex.schema.createTable('users', (t) => {
		t.text('id').primary();
		// Stored in lower case; the one key by which a person signs in.
		t.text('email').notNullable().unique();
		t.text('name').notNullable();
		t.text('password_hash');
		t.text('email_verified_at');
		t.text('disabled_at');
		t.text('created_at').notNullable();
	});

	await knex.schema.createTable('clients', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('name').notNullable();
		t.text('contact_name').notNullable().defaultTo('');
		t.text('contact_email').notNullable().defaultTo('');
		t.text('contact_phone').notNullable().defaultTo('');
		t.text('address').notNullable().defaultTo('');
		t.text('notes').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('archived_at');
		t.index(['practice_id', 'name']);
	});

	await knex.schema.createTable('memberships', (t) => {
		t.text('id').primary();
		t.text('user_id').notNullable().references('users.id');
		t.text('practice_id').notNullable().references('practices.id');
		t.text('role').notNullable().checkIn(['owner', 'engineer', 'checker', 'client']);
		t.text('client_id').references('clients.id');
		t.text('created_at').notNullable();
		t.text('revoked_at');
		t.unique(['user_id', 'practice_id']);
		t.index(['practice_id', 'role']);
		// A client acts for one organisation; a consultant for none.
		t.check("(role = 'client') = (client_id is not null)", [], 'memberships_client_role');
	});

	await knex.schema.createTable('sessions', (t) => {
		// SHA-256 of the cookie's token: the table alone opens nothing.
		t.text('token_hash').primary();
		t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
		t.text('membership_id').references('memberships.id').onDelete('CASCADE');
		t.text('user_agent').notNullable().defaultTo('');
		t.text('created_at').notNullable();
		t.text('last_seen_at').notNullable();
		t.text('expires_at').notNullable();
		t.index(['user_id']);
	});

	await knex.schema.createTable('verification_tokens', (t) => {
		t.text('identifier').notNullable();
		t.text('token_hash').notNullable();
		t.text('expires_at').notNullable();
		t.primary(['identifier', 'token_hash']);
	});

	await knex.schema.createTable('invitations', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').references('clients.id');
		t.text('email').notNullable();
		t.text('name').notNullable();
		t.text('role').notNullable().checkIn(['owner', 'engineer', 'checker', 'client']);
		t.text('token_hash').notNullable().unique();
		t.text('invited_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('expires_at').notNullable();
		t.text('accepted_at');
		t.text('revoked_at');
		t.index(['practice_id', 'created_at']);
	});

	await knex.schema.createTable('password_resets', (t) => {
		t.text('token_hash').primary();
		t.text('user_id').notNullable().references('users.id').onDelete('CASCADE');
		t.text('created_at').notNullable();
		t.text('expires_at').notNullable();
		t.text('used_at');
		t.index(['user_id']);
	});

	await knex.schema.createTable('api_tokens', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('name').notNullable();
		t.text('token_hash').notNullable().unique();
		t.text('scopes_json').notNullable();
		t.text('created_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('last_used_at');
		t.text('revoked_at');
		t.index(['practice_id']);
	});
}

export async function down(knex: Knex): Promise<void> {
	for (const table of [
		'api_tokens',
		'password_resets',
		'invitations',
		'verification_tokens',
		'sessions',
		'memberships',
		'clients',
		'users',
		'practices'
	]) {
		await knex.schema.dropTable(table);
	}
}
