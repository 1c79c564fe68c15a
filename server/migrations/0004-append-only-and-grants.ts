import type { Migration } from '../lib/migrate.ts';

/** Tables whose rows are never changed or removed. */
export const appendOnlyTables = [
  'sales_entry',
  'sales_revision',
  'calendar_revision',
  'promotion_entry',
  'price_entry',
  'event_entry',
  'forecast_run',
  'fit',
  'run_series',
  'run_total',
  'plan_version',
  'override',
  'plan_snapshot',
  'round',
  'hand_over',
  'lock_event',
  'pack',
  'stored_file',
  'stored_file_chunk',
  'audit_entry',
];

/**
 * History can't be rewritten: append-only tables refuse UPDATE, DELETE and TRUNCATE by trigger for everyone, and by grant for the application.
 * Grants name the roles only where they exist (a server of one's own may have a single role).
 */
export const appendOnlyAndGrants: Migration = {
  name: '0004-append-only-and-grants',
  sql: `
create function refuse_change() returns trigger language plpgsql as $$
begin
  raise exception 'rows of % are never changed or removed', tg_table_name using errcode = 'insufficient_privilege';
end $$;
${appendOnlyTables
  .map(
    (table) => `
create trigger ${table}_append_only before update or delete on ${table} for each row execute function refuse_change();
create trigger ${table}_no_truncate before truncate on ${table} for each statement execute function refuse_change();`,
  )
  .join('')}

do $grants$
begin
  if exists (select from pg_roles where rolname = 'fairweek_application') then
    grant usage on schema public to fairweek_application;
    grant select, insert, update, delete on all tables in schema public to fairweek_application;
    grant usage, select on all sequences in schema public to fairweek_application;
    revoke update, delete, truncate on ${appendOnlyTables.join(', ')} from fairweek_application;
    revoke delete, truncate on category, product_line, item, location, "import" from fairweek_application;
    revoke insert, update, delete on applied_migration from fairweek_application;
  end if;
  if exists (select from pg_roles where rolname = 'fairweek_reader') then
    grant usage on schema public to fairweek_reader;
    grant select on all tables in schema public to fairweek_reader;
    revoke select on session, person, invitation from fairweek_reader;
    grant select (id, name, is_active) on person to fairweek_reader;
  end if;
end $grants$;
`,
};
