/** The first schema. Times are timestamptz by the database's clock; big counts are bigint or numeric. */
export const FIRST_SCHEMA = /* sql */ `
create table person (
  id uuid primary key default gen_random_uuid(),
  email text not null,
  name text not null,
  role text not null check (role in ('admin', 'researcher', 'reader')),
  password_hash text,
  token_version integer not null default 0,
  active boolean not null default true,
  letters_settled boolean not null default true,
  letters_spent boolean not null default true,
  letters_broken boolean not null default true,
  appearance text not null default 'system' check (appearance in ('system', 'light', 'dark')),
  served_at timestamptz not null default '-infinity',
  jump_after timestamptz not null default '-infinity',
  seen_at timestamptz,
  created_at timestamptz not null default now()
);
create unique index person_email on person (lower(email));

-- what one person may use. On the person: served_at is when a worker last began something of theirs (fair turns);
-- before jump_after a new search of theirs does not jump the turn, so that others get back what jumping took
create table allowance (
  person_id uuid primary key references person(id),
  workers integer not null check (workers >= 0),
  cpu_ms_per_day bigint not null check (cpu_ms_per_day >= 0)
);

-- invitation and password links; only the hash of the key is kept
create table key_link (
  key_sha256 text primary key,
  purpose text not null check (purpose in ('invitation', 'password')),
  person_id uuid not null references person(id),
  created_at timestamptz not null default now(),
  expires_at timestamptz not null,
  used_at timestamptz
);

create table api_token (
  id uuid primary key default gen_random_uuid(),
  person_id uuid not null references person(id),
  name text not null,
  token_sha256 text not null unique,
  created_at timestamptz not null default now(),
  last_used_at timestamptz,
  revoked_at timestamptz
);

create table study (
  id uuid primary key default gen_random_uuid(),
  title text not null,
  created_by uuid not null references person(id),
  created_at timestamptz not null default now(),
  changed_at timestamptz not null default now(),
  deleted_at timestamptz
);

create table member (
  study_id uuid not null references study(id),
  person_id uuid not null references person(id),
  access text not null check (access in ('lead', 'coauthor', 'reader')),
  letters boolean not null default true,
  primary key (study_id, person_id)
);
create index member_person on member (person_id);

create table question (
  id uuid primary key default gen_random_uuid(),
  study_id uuid not null references study(id),
  asked_by uuid not null references person(id),
  title text,
  document text not null,               -- as entered, canonical JSON with title and budget
  source_kind text not null,
  source_label text not null,
  target text not null,                 -- JSON, for lists: a document can be megabytes long
  scope text not null check (scope in ('one', 'all')),
  created_at timestamptz not null default now()
);
create index question_study on question (study_id, created_at desc, id desc);

create table note (
  id uuid primary key default gen_random_uuid(),
  study_id uuid not null references study(id),
  question_id uuid references question(id),
  person_id uuid not null references person(id),
  text text not null,
  at timestamptz not null default now()
);
create index note_study on note (study_id, at desc, id desc);
create index note_question on note (question_id, at desc, id desc) where question_id is not null;

-- one execution of a question; state words and transitions: packages/contracts/src/states.ts
create table search (
  id uuid primary key default gen_random_uuid(),
  question_id uuid not null unique references question(id),
  person_id uuid not null references person(id),
  state text not null default 'waiting' check (state in ('waiting', 'searching', 'held', 'settled', 'spent', 'withdrawn', 'broken')),
  phase text check (phase in ('choosing', 'listing', 'assembling', 'checking')),
  reason text,
  held_by uuid references person(id),
  verdict text not null default 'open' check (verdict in ('embeds', 'excluded', 'open')),
  ground text,
  complete boolean not null default false,
  rank integer,
  dimension integer,
  orbits numeric,
  total numeric,
  method text,                          -- one sentence: what was chosen and why
  plan text,                            -- frozen; canonical JSON, written once
  stage integer not null default 0,
  stage_results text not null default '[]',
  estimate text,                        -- JSON: mean, low, high of the nodes of the stage
  budget_cpu_ms bigint,
  cpu_ms bigint not null default 0,
  had_quantum boolean not null default false,      -- false: may jump the turn
  served_at timestamptz not null default '-infinity',
  method_revision integer not null default 1,
  ending_no integer not null default 1,            -- raised by each extension
  created_at timestamptz not null default now(),
  started_at timestamptz,
  ended_at timestamptz
);
create index search_turn on search (person_id, had_quantum, served_at, created_at) where state in ('waiting', 'searching');
create index search_person on search (person_id, state);

-- a piece of a search that one worker runs; every write by a worker is fenced by attempt
create table parcel (
  id bigint generated always as identity primary key,
  search_id uuid not null references search(id),
  phase text not null check (phase in ('choosing', 'listing', 'assembling', 'checking')),
  stage integer not null,
  from_address bigint[] not null,       -- child indices; '{}' is the root. Arrays compare in depth-first preorder
  to_address bigint[],                  -- null is the end of the tree
  state text not null default 'waiting' check (state in ('waiting', 'leased', 'done', 'unneeded')),
  attempt integer not null default 0,
  station_id uuid,
  heartbeat_at timestamptz,
  leased_at timestamptz,
  yield_wanted boolean not null default false,
  yield_for uuid,                                  -- the person whose new search asked for it
  share double precision not null default 0,       -- estimated share of the stage's tree
  share_done double precision not null default 0,  -- part of this parcel that is finished, 0 to 1
  checkpoint text,
  checkpoint_sha256 text,
  method_revision integer not null default 1,
  nodes numeric not null default 0,
  orbits numeric not null default 0,
  cpu_ms bigint not null default 0,
  chunks integer not null default 0,
  crashes integer not null default 0,              -- without a new checkpoint
  alone boolean not null default false,            -- after a crash it runs alone in its station
  alone_crashes integer not null default 0,
  result text                                      -- JSON, what the phase needs at its end
) with (fillfactor = 70);
create index parcel_search on parcel (search_id, phase, stage);
create unique index parcel_once on parcel (search_id, phase, stage, from_address) where phase in ('listing', 'checking');
create index parcel_waiting on parcel (search_id) where state = 'waiting';
create index parcel_leased on parcel (station_id) where state = 'leased';

-- embeddings found by a parcel, in its order; chunks past the last checkpoint are overwritten on resume
create table parcel_chunk (
  parcel_id bigint not null references parcel(id) on delete cascade,
  no integer not null,
  records integer not null,
  gz bytea not null,
  primary key (parcel_id, no)
);
alter table parcel_chunk alter column gz set storage external;

-- the narrow table that polling reads: at most one write in 2 s for each search
create table progress (
  search_id uuid primary key references search(id),
  seq bigint not null default 1,
  changed_at timestamptz not null default now(),
  heard_at timestamptz,
  nodes_per_second double precision
);

create table blob (
  sha256 text primary key,
  gz bytea not null,
  raw_bytes integer not null
);
alter table blob alter column gz set storage external;

create table certificate (
  sha256 text primary key,
  raw_bytes bigint not null,
  chunks integer not null
);
create table certificate_chunk (
  certificate_sha256 text not null references certificate(sha256),
  no integer not null,
  blob_sha256 text not null references blob(sha256),
  primary key (certificate_sha256, no)
);
-- two searches of the same question share the bytes; each was checked anew
create table search_certificate (
  search_id uuid primary key references search(id),
  certificate_sha256 text not null references certificate(sha256),
  checker_line text not null,
  checker_revision integer not null,
  check_cpu_ms bigint not null,
  checked_at timestamptz not null default now()
);
-- a certificate that is still being checked in parcels, or that the checker did not accept
create table draft_chunk (
  search_id uuid not null references search(id),
  no integer not null,
  blob_sha256 text not null references blob(sha256),
  primary key (search_id, no)
);

create table usage_day (
  person_id uuid not null references person(id),
  day date not null,
  cpu_ms bigint not null default 0,
  primary key (person_id, day)
);

create table station (
  id uuid primary key,
  name text not null,
  version text not null,
  workers integer not null,
  busy integer not null default 0,
  memory_bytes bigint not null default 0,
  stand_by boolean not null default false,
  alone_for bigint,                     -- a parcel that has to run alone here: nothing else is begun until it can
  started_at timestamptz not null default now(),
  heard_at timestamptz not null default now(),
  stopped_at timestamptz
);

create table letter (
  id uuid primary key default gen_random_uuid(),
  person_id uuid references person(id),
  search_id uuid references search(id),
  ending text not null,                 -- settled, spent, broken; invitation, password
  ending_no integer not null default 1, -- a search can be spent more than once
  recipient text not null,
  subject text not null,
  body text not null,
  message_id text not null unique,
  state text not null default 'waiting' check (state in ('waiting', 'sending', 'sent', 'failed')),
  attempt integer not null default 0,
  not_before timestamptz not null default now(),
  claimed_at timestamptz,
  created_at timestamptz not null default now(),
  sent_at timestamptz,
  fault text
);
create unique index letter_once on letter (person_id, search_id, ending, ending_no) where search_id is not null;
create index letter_due on letter (not_before) where state in ('waiting', 'sending');

create table audit (
  id bigint generated always as identity primary key,
  at timestamptz not null default now(),
  person_id uuid references person(id),
  action text not null,
  subject text not null,
  detail text not null default ''
);

create table idempotency (
  person_id uuid not null references person(id),
  key text not null,
  body_sha256 text not null,
  question_id uuid not null references question(id) deferrable initially deferred,
  at timestamptz not null default now(),
  primary key (person_id, key)
);

create table setting (
  name text primary key,
  value text not null
);
`;
