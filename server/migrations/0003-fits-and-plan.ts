import type { Migration } from '../lib/migrate.ts';

/** Fits, runs stored as arrays, plan versions that store only what changed, rounds, hand-overs, locks and packs. */
export const fitsAndPlan: Migration = {
  name: '0003-fits-and-plan',
  sql: `
create table forecast_run (
  id integer generated always as identity primary key,
  category_id integer not null references category,
  job_id integer references job,
  sales_revision_id integer references sales_revision,
  calendar_revision_id integer references calendar_revision,
  -- Last week that was read; the first planned week follows it.
  sales_to date not null,
  first_week date not null,
  weeks integer not null check (weeks > 0),
  actor_id integer not null references person,
  at timestamptz not null default now()
);
create index forecast_run_category_idx on forecast_run (category_id, id desc);

create table fit (
  id integer generated always as identity primary key,
  run_id integer not null references forecast_run,
  line_id integer not null references product_line,
  sales_revision_id integer references sales_revision,
  calendar_revision_id integer references calendar_revision,
  specification jsonb not null,
  coefficients jsonb not null,
  factor_r double precision[] not null,
  scores jsonb not null,
  summary jsonb not null,
  findings jsonb not null,
  -- Errors, collinearity, tests, influence and own evidence; null where nothing was fitted.
  diagnosis jsonb,
  at timestamptz not null default now(),
  unique (run_id, line_id)
);
create index fit_line_idx on fit (line_id, id desc);

-- One row per series with arrays over the weeks of the run. mean and base are unrounded; model is mean rounded to the unit step with the remainder carried.
create table run_series (
  run_id integer not null references forecast_run,
  line_id integer not null references product_line,
  item_id integer not null references item,
  location_id integer not null references location,
  first_week date not null,
  -- As it was then: a version is rebuilt with the steps it was spread in.
  unit_step double precision not null check (unit_step > 0),
  method text not null,
  model double precision[] not null,
  mean double precision[] not null,
  base double precision[] not null,
  p2_5 double precision[] not null,
  p10 double precision[] not null,
  p50 double precision[] not null,
  p90 double precision[] not null,
  p97_5 double precision[] not null,
  price double precision[] not null,
  marks jsonb not null default '{}',
  parts jsonb not null default '{}',
  primary key (run_id, item_id, location_id)
);
create index run_series_line_idx on run_series (run_id, line_id);

create table run_total (
  run_id integer not null references forecast_run,
  line_id integer not null references product_line,
  scope text not null check (scope in ('line', 'item', 'location')),
  item_id integer references item,
  location_id integer references location,
  first_week date not null,
  mean double precision[] not null,
  p2_5 double precision[] not null,
  p10 double precision[] not null,
  p50 double precision[] not null,
  p90 double precision[] not null,
  p97_5 double precision[] not null
);
create unique index run_total_key on run_total (run_id, line_id, scope, coalesce(item_id, 0), coalesce(location_id, 0));

create table plan_version (
  id integer generated always as identity primary key,
  line_id integer not null references product_line,
  number integer not null,
  parent integer,
  run_id integer not null references forecast_run,
  kind text not null check (kind in ('forecast', 'overrides', 'adjustment')),
  author_id integer not null references person,
  at timestamptz not null default clock_timestamp(),
  reason text,
  note text,
  save_id uuid not null default gen_random_uuid(),
  -- Weeks that were locked when it was saved; their numbers were carried over unchanged.
  held_weeks date[] not null default '{}',
  changed_cells integer not null default 0,
  changed_units double precision not null default 0,
  unique (line_id, number)
);

-- scope: item and location null = the line; one of them = its total; both = a series. It applies to every week from first to last.
create table override (
  id integer generated always as identity primary key,
  version_id integer not null references plan_version,
  line_id integer not null references product_line,
  sequence integer not null,
  item_id integer references item,
  location_id integer references location,
  first_week date not null,
  last_week date not null,
  operation text not null check (operation in ('set to', 'add', 'scale by', 'clear')),
  value double precision,
  clears integer[],
  reason_id integer references reason,
  note text,
  base_model double precision[] not null,
  check (last_week >= first_week),
  check ((operation = 'clear') = (value is null))
);
create unique index override_sequence_key on override (line_id, sequence);
create index override_version_idx on override (version_id);

-- The newest state of a line's plan, kept by the transaction that writes the version.
create table plan_series (
  line_id integer not null references product_line,
  item_id integer not null references item,
  location_id integer not null references location,
  first_week date not null,
  plan double precision[] not null,
  primary key (line_id, item_id, location_id)
);

-- Whole state of every 50th version, so that rebuilding an old one stays short.
create table plan_snapshot (
  version_id integer not null references plan_version,
  item_id integer not null references item,
  location_id integer not null references location,
  first_week date not null,
  plan double precision[] not null,
  primary key (version_id, item_id, location_id)
);

create table round (
  id integer generated always as identity primary key,
  category_id integer not null references category,
  opens date not null,
  due date not null,
  first_week date not null,
  last_week date not null,
  actor_id integer not null references person,
  at timestamptz not null default clock_timestamp(),
  check (last_week >= first_week)
);
create index round_category_idx on round (category_id, id desc);

create table hand_over (
  id integer generated always as identity primary key,
  line_id integer not null references product_line,
  round_id integer not null references round,
  state text not null check (state in ('submitted', 'returned', 'lapsed')),
  version integer not null,
  actor_id integer not null references person,
  at timestamptz not null default clock_timestamp(),
  comment text
);
create index hand_over_line_idx on hand_over (line_id, id desc);

create table lock_event (
  id integer generated always as identity primary key,
  line_id integer not null references product_line,
  first_week date not null,
  last_week date not null,
  locked boolean not null,
  version integer not null,
  actor_id integer not null references person,
  at timestamptz not null default clock_timestamp(),
  reason text,
  check (last_week >= first_week)
);
create index lock_event_line_idx on lock_event (line_id, id desc);

-- Weeks of a line that are locked now, with the event that locked them.
create view locked_week as
  select line_id, week_start, event_id, version, actor_id, at from (
    select distinct on (e.line_id, w.week_start) e.line_id, w.week_start::date as week_start, e.id as event_id, e.locked, e.version, e.actor_id, e.at
    from lock_event e
    cross join lateral generate_series(e.first_week::timestamp, e.last_week::timestamp, interval '7 days') as w(week_start)
    order by e.line_id, w.week_start, e.id desc
  ) newest where locked;

create table pack (
  id integer generated always as identity primary key,
  number integer not null,
  category_id integer not null references category,
  first_week date not null,
  last_week date not null,
  -- [{lineId, name, version, units, isLocked}] as they were when it was built.
  versions jsonb not null,
  units double precision not null,
  net_value double precision,
  file_id integer not null references stored_file,
  sha256 text not null,
  actor_id integer not null references person,
  at timestamptz not null default now(),
  unique (category_id, number)
);
`,
};
