import type { Migration } from '../lib/migrate.ts';

/** Imports, sales entries (append-only, by month), the week in force beside them, and the calendar with its revisions. */
export const salesAndCalendar: Migration = {
  name: '0002-sales-and-calendar',
  sql: `
create table "import" (
  id integer generated always as identity primary key,
  kind text not null default 'sales' check (kind in ('sales', 'calendar')),
  file_id integer not null references stored_file,
  sha256 text not null,
  mapping jsonb,
  state text not null check (state in ('reading', 'to-check', 'accepting', 'accepted', 'withdrawing', 'withdrawn', 'refused', 'discarded')),
  totals jsonb,
  -- Sheets, sample rows and names that aren't known yet, as the last reading found them.
  preview jsonb,
  refusal text,
  actor_id integer not null references person,
  created_at timestamptz not null default now(),
  accepted_at timestamptz,
  accepted_by integer references person,
  withdrawn_at timestamptz,
  withdrawn_by integer references person,
  withdrawn_why text
);
create index import_sha256_idx on "import" (sha256);

-- Which categories a file touches, for scoping.
create table import_category (
  import_id integer not null references "import" on delete cascade,
  category_id integer not null references category,
  primary key (import_id, category_id)
);

create table import_finding (
  id bigint generated always as identity primary key,
  import_id integer not null references "import" on delete cascade,
  sheet text,
  cell text,
  row integer,
  kind text not null,
  before text,
  after text,
  verdict text not null check (verdict in ('refused', 'repaired', 'noticed')),
  detail text not null,
  -- The refused row as read, so that it can be given back.
  row_values jsonb
);
create index import_finding_import_idx on import_finding (import_id, id);

-- Each accept or withdraw is a revision; a fit names the one it read.
create table sales_revision (
  id integer generated always as identity primary key,
  import_id integer not null references "import",
  change text not null check (change in ('accept', 'withdraw')),
  actor_id integer not null references person,
  at timestamptz not null default now()
);

-- No foreign keys here and on sales_week: an import of 200,000 rows took twice as long for their checks. Ids come from the very tables they would
-- point to, in the statement that writes them, and the application may not delete from those.
create table sales_entry (
  import_id integer not null,
  revision_id integer not null,
  item_id integer not null,
  location_id integer not null,
  week_start date not null,
  units double precision not null,
  net_value double precision,
  price double precision,
  regular_price double precision,
  feature real,
  display real,
  mechanics jsonb,
  gap real,
  days_open real,
  file_row integer
) partition by range (week_start);
-- No index by key: the earlier values of a key lie in one month's table, which is read whole in milliseconds; keeping the index took as long as
-- writing the rows. Entries of an import lie together, so a block range index finds them and costs next to nothing to keep.
create index sales_entry_import_idx on sales_entry using brin (import_id) with (pages_per_range = 32);

-- The application may not create tables; it asks for the months that an import needs, in a transaction of its own before the import's.
create function ensure_sales_months(from_week date, to_week date) returns void language plpgsql security definer set search_path = public, pg_temp as $months$
declare month_start date;
begin
  if to_week - from_week > 366 * 60 then raise exception 'too long a range of months'; end if;
  for month_start in select generate_series(date_trunc('month', from_week)::date, to_week, interval '1 month')::date loop
    if to_regclass('sales_entry_' || to_char(month_start, 'YYYYMM')) is null then
      perform pg_advisory_xact_lock(hashtext('ensure_sales_months'));
      execute format('create table if not exists %I partition of sales_entry for values from (%L) to (%L)',
        'sales_entry_' || to_char(month_start, 'YYYYMM'), month_start, (month_start + interval '1 month')::date);
    end if;
  end loop;
end $months$;

-- The entry in force per key: that of the newest import that is accepted and not withdrawn.
create table sales_week (
  item_id integer not null,
  location_id integer not null,
  week_start date not null,
  import_id integer not null,
  revision_id integer not null,
  units double precision not null,
  net_value double precision,
  price double precision,
  regular_price double precision,
  feature real,
  display real,
  mechanics jsonb,
  gap real,
  days_open real,
  primary key (item_id, location_id, week_start)
);

create table calendar_revision (
  id integer generated always as identity primary key,
  import_id integer references "import",
  change text not null check (change in ('accept', 'withdraw', 'edit')),
  actor_id integer not null references person,
  at timestamptz not null default now(),
  note text
);

-- Promotions on items × locations × weeks. For each item, location and week the newest entry that isn't withdrawn is in force;
-- is_none states that there is no promotion. Null locations = every location.
create table promotion_entry (
  id bigint generated always as identity primary key,
  revision_id integer not null references calendar_revision,
  import_id integer references "import",
  promotion text not null,
  name text not null,
  item_ids integer[] not null,
  location_ids integer[],
  first_week date not null,
  last_week date not null,
  depth double precision check (depth between 0 and 1),
  price double precision check (price >= 0),
  feature real not null default 0 check (feature between 0 and 1),
  display real not null default 0 check (display between 0 and 1),
  mechanics jsonb not null default '{}',
  is_none boolean not null default false,
  check (last_week >= first_week)
);
create index promotion_entry_weeks_idx on promotion_entry (first_week, last_week);
create index promotion_entry_items_idx on promotion_entry using gin (item_ids);

-- Regular price from a week on, until the next entry.
create table price_entry (
  id bigint generated always as identity primary key,
  revision_id integer not null references calendar_revision,
  import_id integer references "import",
  item_id integer not null references item,
  location_id integer references location,
  first_week date not null,
  regular_price double precision not null check (regular_price > 0)
);
create index price_entry_item_idx on price_entry (item_id, first_week);

create table event_entry (
  id bigint generated always as identity primary key,
  revision_id integer not null references calendar_revision,
  event text not null,
  name text not null,
  location_ids integer[],
  first_day date not null,
  last_day date not null,
  is_none boolean not null default false,
  check (last_day >= first_day)
);

-- Calendar imports that were withdrawn no longer count.
create view calendar_import_out as select id from "import" where kind = 'calendar' and state = 'withdrawn';

create view promotion_week as
  select distinct on (item_id, location_id, week_start) p.id, p.revision_id, p.promotion, p.name, item_id, location_id, w.week_start::date as week_start,
         p.depth, p.price, p.feature, p.display, p.mechanics, p.is_none
  from promotion_entry p
  cross join lateral unnest(p.item_ids) as item_id
  cross join lateral unnest(coalesce(p.location_ids, array[0])) as location_id
  cross join lateral generate_series(p.first_week::timestamp, p.last_week::timestamp, interval '7 days') as w(week_start)
  where p.import_id is null or p.import_id not in (select id from calendar_import_out)
  order by item_id, location_id, week_start, p.revision_id desc, p.id desc;

create view price_in_force as
  select distinct on (item_id, coalesce(location_id, 0), first_week) id, revision_id, item_id, location_id, first_week, regular_price
  from price_entry
  where import_id is null or import_id not in (select id from calendar_import_out)
  order by item_id, coalesce(location_id, 0), first_week, revision_id desc, id desc;
`,
};
