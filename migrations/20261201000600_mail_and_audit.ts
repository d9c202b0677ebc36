import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('mail_outbox', (t) => {
		t.text('id').primary();
		// Null for mail that belongs to no practice (a sign-in link to someone with several).
		t.text('practice_id').references('practices.id');
		t.text('template').notNullable();
		t.text('to_email').notNullable();
		t.text('to_name').notNullable().defaultTo('');
		t.text('subject').notNullable();
		t.text('text').notNullable();
		t.text('html').notNullable();
		t.text('status').notNullable().checkIn(['queued', 'sent', 'failed']);
		t.integer('attempts').notNullable().defaultTo(0);
		t.text('next_attempt_at').notNullable();
		t.text('last_error');
		t.text('created_at').notNullable();
		t.text('sent_at');
		t.index(['status', 'next_attempt_at']);
		t.index(['practice_id', 'created_at']);
	});

	await knex.schema.createTable('audit_events', (t) => {
		t.increments('id');
		t.text('practice_id').references('practices.id');
		t.text('actor_user_id');
		t.text('actor_name').notNullable();
		t.text('action').notNullable();
		t.text('subject_kind').notNullable();
		t.text('subject_id').notNullable();
		t.text('detail_json').notNullable();
		t.text('request_id');
		t.text('at').notNullable();
		t.index(['practice_id', 'at']);
		t.index(['subject_kind', 'subject_id']);
	});
	// Append only: history that can be edited is not history.
	await knex.raw(
		"create trigger audit_events_no_update before update on audit_events begin select raise(abort, 'audit events are append-only'); end"
	);
	await knex.raw(
		"create trigger audit_events_no_delete before delete on audit_events begin select raise(abort, 'audit events are append-only'); end"
	);
}

export async function down(knex: Knex): Promise<void> {
	await knex.schema.dropTable('audit_events');
	await knex.schema.dropTable('mail_outbox');
}
