import type { Migration } from '../lib/migrate.ts';

/** People, rights and the range: who works here and what is planned. Dated, so that yesterday's fit and rights stay what they were. */
export const peopleAndRange: Migration = {
  name: '0001-people-and-range',
  sql: `
create table person (
  id integer generated always as identity primary key,
  name text not null check (name <> ''),
  email text not null,
  password_hash text,
  is_active boolean not null default true,
  created_at timestamptz not null default now(),
  last_seen_at timestamptz
);
create unique index person_email_key on person (lower(email));

-- Session ids are SHA-256 of the random token in the cookie; the token itself is stored nowhere.
create table session (
  id text primary key,
  user_id integer not null references person on delete cascade,
  expires_at timestamptz not null,
  created_at timestamptz not null default now()
);
create index session_user_id_idx on session (user_id);

create table category (
  id integer generated always as identity primary key,
  name text not null check (name <> ''),
  created_at timestamptz not null default now()
);
create unique index category_name_key on category (lower(name));

create table category_assignment (
  person_id integer not null references person on delete cascade,
  category_id integer references category,
  role text not null check (role in ('viewer', 'planner', 'category-lead', 'finance', 'administrator'))
);
create unique index category_assignment_key on category_assignment (person_id, role, coalesce(category_id, 0));

create table person_right (
  person_id integer not null references person on delete cascade,
  name text not null check (name in ('data-steward')),
  primary key (person_id, name)
);

create table invitation (
  id integer generated always as identity primary key,
  token_hash text not null unique,
  kind text not null check (kind in ('first-administrator', 'invitation')),
  person_id integer references person on delete cascade,
  created_at timestamptz not null default now(),
  expires_at timestamptz not null,
  used_at timestamptz
);

create table product_line (
  id integer generated always as identity primary key,
  category_id integer not null references category,
  name text not null check (name <> ''),
  created_at timestamptz not null default now()
);
create unique index product_line_name_key on product_line (category_id, lower(name));

create table item (
  id integer generated always as identity primary key,
  code text not null check (code <> ''),
  name text not null check (name <> ''),
  unit_step numeric not null default 1 check (unit_step > 0),
  case_size numeric check (case_size > 0),
  supplier text,
  lead_time_weeks integer check (lead_time_weeks >= 0),
  created_at timestamptz not null default now()
);
create unique index item_code_key on item (lower(code));

-- valid_to is exclusive; null = until further notice. An item is in one line at a time.
create table item_membership (
  item_id integer not null references item,
  line_id integer not null references product_line,
  valid_from date not null,
  valid_to date,
  primary key (item_id, valid_from),
  check (valid_to is null or valid_to > valid_from)
);
create index item_membership_line_idx on item_membership (line_id);

create table location (
  id integer generated always as identity primary key,
  code text not null check (code <> ''),
  name text not null check (name <> ''),
  created_at timestamptz not null default now()
);
create unique index location_code_key on location (lower(code));

create table listing (
  item_id integer not null references item,
  location_id integer not null references location,
  valid_from date not null,
  valid_to date,
  primary key (item_id, location_id, valid_from)
);

create table item_cost (
  item_id integer not null references item,
  valid_from date not null,
  cost numeric not null check (cost >= 0),
  primary key (item_id, valid_from)
);

create table vat_rate (
  scope text not null,
  valid_from date not null,
  rate numeric not null check (rate >= 0 and rate < 1),
  primary key (scope, valid_from)
);

create table successor (
  item_id integer not null references item,
  of_item_id integer not null references item,
  valid_from date not null,
  primary key (item_id, valid_from),
  check (item_id <> of_item_id)
);

create table setting (
  name text primary key,
  value jsonb not null
);
insert into setting (name, value) values
  ('companyName', '""'), ('holidayCountry', '""'), ('currency', '"EUR"'), ('firstWeekday', 'null'),
  ('horizonWeeks', '13'), ('noteThreshold', '0.25'), ('lookThreshold', '0.1');

create table reason (
  id integer generated always as identity primary key,
  name text not null unique check (name <> ''),
  is_active boolean not null default true,
  position integer not null default 0
);
insert into reason (name, position) values
  ('Display agreed', 1), ('Supplier short', 2), ('Local event', 3), ('Competitor action', 4), ('Range change', 5),
  ('Weather', 6), ('Price decision', 7), ('Correction of the model', 8), ('Other', 9);

create table job (
  id integer generated always as identity primary key,
  kind text not null,
  -- What it works on: 'import:12', 'category:3', 'pack:category:3'.
  subject text not null,
  category_id integer references category,
  payload jsonb not null default '{}',
  state text not null default 'queued' check (state in ('queued', 'running', 'done', 'failed')),
  progress double precision not null default 0 check (progress between 0 and 1),
  message jsonb,
  result jsonb,
  problem jsonb,
  actor_id integer not null references person,
  created_at timestamptz not null default now(),
  started_at timestamptz,
  ended_at timestamptz
);
create index job_subject_idx on job (subject, id desc);
-- One at a time for each subject.
create unique index job_active_key on job (subject) where state in ('queued', 'running');

-- Files live in the database in chunks, never on one machine's disk.
create table stored_file (
  id integer generated always as identity primary key,
  file_name text not null,
  size_bytes bigint not null,
  sha256 text not null,
  created_at timestamptz not null default now()
);
create table stored_file_chunk (
  file_id integer not null references stored_file on delete cascade,
  position integer not null,
  bytes bytea not null,
  primary key (file_id, position)
);

-- The id of a person stays; the name beside it is looked up, so that it can be replaced on request.
create table audit_entry (
  id bigint generated always as identity primary key,
  actor_id integer references person,
  at timestamptz not null default clock_timestamp(),
  action text not null,
  subject text not null,
  category_id integer references category,
  old jsonb,
  new jsonb,
  why text,
  source text not null default 'web'
);
create index audit_entry_subject_idx on audit_entry (subject, id);
create index audit_entry_actor_idx on audit_entry (actor_id, id);

create table mail_outbox (
  id bigint generated always as identity primary key,
  recipient_id integer not null references person,
  kind text not null,
  payload jsonb not null,
  created_at timestamptz not null default now(),
  sent_at timestamptz,
  attempts integer not null default 0,
  last_error text
);
`,
};
