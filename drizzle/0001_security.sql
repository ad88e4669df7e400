grant usage on schema public to wavekeep_app;
--> statement-breakpoint
-- The record's clock: the database's own, to the millisecond. A stated one is honoured for the seeding role alone, and
-- only in a lab marked demo; for everybody else asking for it is an error, not a silence.
create or replace function record_now() returns timestamptz language plpgsql volatile set search_path = public, pg_temp as $$
declare
  stated text := nullif(current_setting('app.stated_now', true), '');
begin
  if stated is null then
    return date_trunc('milliseconds', clock_timestamp());
  end if;
  if session_user <> 'wavekeep_seeder' then
    raise exception 'The record''s clock can be stated by the seeding role alone.' using errcode = '42501';
  end if;
  if not exists (select 1 from labs where id = nullif(current_setting('app.lab', true), '')::uuid and is_demo) then
    raise exception 'The record''s clock can be stated in a demo lab alone.' using errcode = '42501';
  end if;
  return date_trunc('milliseconds', stated::timestamptz);
end
$$;
--> statement-breakpoint
-- Takes the lock of the current lab's chain, held until the commit, and returns its head and the time of the next entry.
-- Volatile: the head is read by a statement of its own, after the lock, and so sees what the last holder committed.
create or replace function trail_begin(out number bigint, out hash text, out at timestamptz) language plpgsql volatile set search_path = public, pg_temp as $$
declare
  lab uuid := nullif(current_setting('app.lab', true), '')::uuid;
begin
  if lab is null then
    raise exception 'No lab is set: the trail has one chain a lab.' using errcode = '42501';
  end if;
  perform pg_advisory_xact_lock(hashtextextended('trail:' || lab::text, 0));
  select t.number, t.hash, t.at into number, hash, at
    from trail_entries t where t.lab_id = lab order by t.number desc limit 1;
  number := coalesce(number, 0);
  hash := coalesce(hash, repeat('0', 64));
  at := greatest(record_now(), at);
end
$$;
--> statement-breakpoint
-- The database's own look at each entry: next in its chain, under the lock, at the clock's time, with a hash that fits.
create or replace function trail_entry_fits() returns trigger language plpgsql volatile set search_path = public, pg_temp as $$
declare
  head_number bigint;
  head_hash text;
  head_at timestamptz;
begin
  perform pg_advisory_xact_lock(hashtextextended('trail:' || new.lab_id::text, 0));
  select t.number, t.hash, t.at into head_number, head_hash, head_at
    from trail_entries t where t.lab_id = new.lab_id order by t.number desc limit 1;
  if new.number <> coalesce(head_number, 0) + 1 or new.previous_hash <> coalesce(head_hash, repeat('0', 64)) then
    raise exception 'This entry does not follow the head of its chain.' using errcode = '23514';
  end if;
  if new.hash <> encode(sha256(convert_to(new.canonical, 'UTF8')), 'hex') then
    raise exception 'The hash of this entry is not that of its text.' using errcode = '23514';
  end if;
  if new.at is distinct from head_at and abs(extract(epoch from new.at - record_now())) > 60 then
    raise exception 'The time of this entry is not the record''s clock.' using errcode = '23514';
  end if;
  if new.at < head_at then
    raise exception 'The record''s clock never runs back.' using errcode = '23514';
  end if;
  return new;
end
$$;
--> statement-breakpoint
drop trigger if exists trail_entry_fits on trail_entries;
create trigger trail_entry_fits before insert on trail_entries for each row execute function trail_entry_fits();
--> statement-breakpoint
-- SHA-256 of a row as it stands: over `name=hash;` of its columns that are not null, in the table's order, each hash the
-- SHA-256 of the column's bytes or of its text. Columns that a later migration adds are null in older rows and so leave
-- their hashes as they were.
create or replace function row_sha256(table_name text, row_id uuid) returns text language plpgsql stable
  set search_path = public, pg_temp set timezone = 'UTC' set datestyle = 'ISO, YMD' set intervalstyle = 'postgres' set extra_float_digits = 1 as $$
declare
  parts text;
  result text;
begin
  select string_agg(
      format('coalesce(%L || encode(sha256(%s), ''hex'') || '';'', '''')', a.attname || '=',
        case when a.atttypid = 'bytea'::regtype then format('r.%I', a.attname) else format('convert_to(r.%I::text, ''UTF8'')', a.attname) end),
      ' || ' order by a.attnum)
    into parts
    from pg_attribute a
    where a.attrelid = to_regclass(format('public.%I', table_name)) and a.attnum > 0 and not a.attisdropped;
  if parts is null then
    return null;
  end if;
  execute format('select encode(sha256(convert_to(%s, ''UTF8'')), ''hex'') from public.%I r where r.lab_id = $1 and r.id = $2', parts, table_name)
    into result using nullif(current_setting('app.lab', true), '')::uuid, row_id;
  return result;
end
$$;
--> statement-breakpoint
create or replace function refuse_truncate() returns trigger language plpgsql as $$
begin
  raise exception 'The table % is part of the record and cannot be emptied.', tg_table_name using errcode = '42501';
end
$$;
--> statement-breakpoint
-- What happens before a lab is known: the whole list of functions that look across labs. Each is owned by a role that
-- cannot log in, answers one question, and is granted to the app's role by name.

-- Sign-in by e-mail: who it is and what the password is held against.
create or replace function sign_in_lookup(given_email text)
  returns table (person_id uuid, name text, password_hash text) language sql stable security definer set search_path = public, pg_temp as $$
  select p.id, p.name, c.password_hash from people p join credentials c on c.person_id = p.id where p.email = lower(given_email)
$$;
--> statement-breakpoint
-- The current person's own hashes: the password is asked for again when they sign.
create or replace function own_credentials()
  returns table (password_hash text, pin_hash text) language sql stable security definer set search_path = public, pg_temp as $$
  select c.password_hash, c.pin_hash from credentials c where c.person_id = nullif(current_setting('app.person', true), '')::uuid
$$;
--> statement-breakpoint
create or replace function set_own_password(new_hash text) returns void language sql volatile security definer set search_path = public, pg_temp as $$
  update credentials set password_hash = new_hash, password_changed_at = record_now()
    where person_id = nullif(current_setting('app.person', true), '')::uuid
$$;
--> statement-breakpoint
create or replace function set_own_pin(new_hash text) returns void language sql volatile security definer set search_path = public, pg_temp as $$
  update credentials set pin_hash = new_hash where person_id = nullif(current_setting('app.person', true), '')::uuid
$$;
--> statement-breakpoint
-- The current person's labs.
create or replace function my_labs()
  returns table (lab_id uuid, name text, zone text, is_demo boolean, last_seen_at timestamptz) language sql stable security definer set search_path = public, pg_temp as $$
  select l.id, l.name, l.zone, l.is_demo, m.last_seen_at from memberships m join labs l on l.id = m.lab_id
    where m.person_id = nullif(current_setting('app.person', true), '')::uuid and m.ended_at is null
    order by l.name, l.id
$$;
--> statement-breakpoint
-- Labs of the person an e-mail belongs to: where a refused sign-in is recorded.
create or replace function labs_of_email(given_email text)
  returns table (lab_id uuid, zone text, is_demo boolean) language sql stable security definer set search_path = public, pg_temp as $$
  select l.id, l.zone, l.is_demo from people p join memberships m on m.person_id = p.id join labs l on l.id = m.lab_id
    where p.email = lower(given_email) and m.ended_at is null
$$;
--> statement-breakpoint
-- A reset is asked for: keeps the token's hash for a person that exists, and says whom to mail. Older tokens end.
create or replace function begin_reset(given_email text, given_token_hash text)
  returns table (person_id uuid, name text, email text, reset_id uuid) language plpgsql volatile security definer set search_path = public, pg_temp as $$
declare
  found_id uuid;
begin
  select p.id into found_id from people p where p.email = lower(given_email);
  if found_id is null then
    return;
  end if;
  update password_resets r set used_at = record_now() where r.person_id = found_id and r.used_at is null;
  return query
    with made as (
      insert into password_resets (id, person_id, token_hash, created_at, expires_at)
        values (gen_random_uuid(), found_id, given_token_hash, record_now(), record_now() + interval '1 hour') returning id
    )
    select p.id, p.name, p.email, made.id from people p, made where p.id = found_id;
end
$$;
--> statement-breakpoint
-- A reset is carried out, once, within its hour; null when the token does not hold.
create or replace function finish_reset(given_token_hash text, new_hash text) returns uuid language plpgsql volatile security definer set search_path = public, pg_temp as $$
declare
  found_id uuid;
begin
  update password_resets set used_at = record_now()
    where token_hash = given_token_hash and used_at is null and expires_at > record_now() returning person_id into found_id;
  if found_id is not null then
    update credentials set password_hash = new_hash, password_changed_at = record_now() where person_id = found_id;
  end if;
  return found_id;
end
$$;
--> statement-breakpoint
-- What an invitation offers, by its token.
create or replace function invitation_of(given_token_hash text)
  returns table (invitation_id uuid, lab_id uuid, lab_name text, zone text, is_demo boolean, email text, roles text[], invited_by text, person_id uuid, person_name text, password_hash text, state text)
  language sql stable security definer set search_path = public, pg_temp as $$
  select i.id, l.id, l.name, l.zone, l.is_demo, i.email, i.roles, coalesce(b.name, 'Wavekeep'), p.id, p.name, c.password_hash,
      case when i.accepted_at is not null then 'accepted' when i.withdrawn_at is not null then 'withdrawn'
           when i.expires_at <= record_now() then 'expired' else 'open' end
    from invitations i join labs l on l.id = i.lab_id
      left join people b on b.id = i.invited_by
      left join people p on p.email = i.email
      left join credentials c on c.person_id = p.id
    where i.token_hash = given_token_hash
$$;
--> statement-breakpoint
-- An open invitation is accepted, once: the person is made if nobody has the address yet, the membership begins (again).
create or replace function accept_invitation(given_token_hash text, given_name text, new_hash text)
  returns table (person_id uuid, lab_id uuid) language plpgsql volatile security definer set search_path = public, pg_temp as $$
#variable_conflict use_column
declare
  offer record;
  who uuid;
begin
  select i.* into offer from invitations i
    where i.token_hash = given_token_hash and i.accepted_at is null and i.withdrawn_at is null and i.expires_at > record_now() for update;
  if not found then
    return;
  end if;
  select p.id into who from people p where p.email = offer.email;
  if who is null then
    if new_hash is null then
      raise exception 'A new person needs a password.' using errcode = '23502';
    end if;
    who := gen_random_uuid();
    insert into people (id, email, name, created_at) values (who, offer.email, given_name, record_now());
    insert into credentials (person_id, password_hash, password_changed_at) values (who, new_hash, record_now());
  end if;
  insert into memberships (lab_id, person_id, roles, joined_at) values (offer.lab_id, who, offer.roles, record_now())
    on conflict (lab_id, person_id) do update set roles = excluded.roles, ended_at = null, version = memberships.version + 1;
  update invitations i set accepted_at = record_now(), accepted_by = who where i.lab_id = offer.lab_id and i.id = offer.id;
  return query select who, offer.lab_id;
end
$$;
--> statement-breakpoint
-- The shared PC that holds this token, and the people who may sign in on it: members with a PIN.
create or replace function bench_device_of(given_token_hash text)
  returns table (device_id uuid, device_name text, lab_id uuid, lab_name text, zone text, is_demo boolean, people jsonb)
  language sql stable security definer set search_path = public, pg_temp as $$
  select d.id, d.name, l.id, l.name, l.zone, l.is_demo,
      coalesce((select jsonb_agg(jsonb_build_object('id', p.id, 'name', p.name) order by p.name, p.id)
        from memberships m join people p on p.id = m.person_id join credentials c on c.person_id = p.id
        where m.lab_id = d.lab_id and m.ended_at is null and c.pin_hash is not null), '[]'::jsonb)
    from bench_devices d join labs l on l.id = d.lab_id where d.token_hash = given_token_hash and d.removed_at is null
$$;
--> statement-breakpoint
-- What a PIN is held against, on an enrolled PC of the person's lab only.
create or replace function bench_credentials(given_token_hash text, given_person uuid)
  returns table (name text, pin_hash text) language sql stable security definer set search_path = public, pg_temp as $$
  select p.name, c.pin_hash from bench_devices d join memberships m on m.lab_id = d.lab_id and m.ended_at is null
      join people p on p.id = m.person_id join credentials c on c.person_id = p.id
    where d.token_hash = given_token_hash and d.removed_at is null and m.person_id = given_person and c.pin_hash is not null
$$;
--> statement-breakpoint
-- Every lab, for the ticks that ask what is due everywhere; each is then visited under its own row security.
create or replace function labs_to_visit()
  returns table (lab_id uuid, zone text, is_demo boolean) language sql stable security definer set search_path = public, pg_temp as $$
  select id, zone, is_demo from labs where id <> '00000000-0000-7000-8000-000000000000' order by id
$$;
--> statement-breakpoint
-- A lab is opened by the installation's owner, or by the seeding role if it is a demo.
create or replace function create_lab(new_id uuid, new_name text, new_zone text, new_altitude_m double precision, demo boolean) returns void
  language plpgsql volatile security definer set search_path = public, pg_temp as $$
begin
  if session_user = 'wavekeep_seeder' and not demo then
    raise exception 'The seeding role opens demo labs alone.' using errcode = '42501';
  end if;
  insert into labs (id, name, zone, altitude_m, is_demo, created_at) values (new_id, new_name, new_zone, new_altitude_m, demo, clock_timestamp());
end
$$;
--> statement-breakpoint
-- Search over one lab. ilike is not leakproof, so under row security no index would serve it: this function applies the
-- lab itself, and nobody can hand it another one.
create or replace function search_lab(wanted text)
  returns table (kind text, id uuid, label text, note text, rank int, configuration_id uuid) language sql stable security definer set search_path = public, pg_temp as $$
  with lab as (select nullif(current_setting('app.lab', true), '')::uuid as id),
    pattern as (select replace(replace(replace(lower(trim(wanted)), '\', '\\'), '%', '\%'), '_', '\_') as text)
  (select 'instrument', i.id, i.name, concat_ws(', ', nullif(i.place, ''), nullif(i.serial, ''), case when i.retired_at is null then null else 'retired' end),
      case when lower(i.name) like p.text || '%' then 0 else 1 end, null::uuid
    from instruments i, lab, pattern p
    where i.lab_id = lab.id and (lower(i.name) like '%' || p.text || '%' or lower(i.serial) like p.text || '%' or lower(i.model) like p.text || '%')
    order by 5, lower(i.name) limit 6)
  union all
  -- A configuration by its own name, or by its instrument's and its own.
  (select 'instrument', i.id, i.name || ' (' || c.name || ')', concat_ws(', ', nullif(i.place, ''), case when c.to_on is null then null else 'ended' end),
      case when lower(c.name) like p.text || '%' or lower(i.name) like p.text || '%' then 0 else 1 end, c.id
    from configurations c join instruments i on i.lab_id = c.lab_id and i.id = c.instrument_id, lab, pattern p
    where c.lab_id = lab.id and c.name is not null and lower(i.name || ' ' || c.name) like '%' || p.text || '%'
    order by 5, c.to_on is not null, lower(i.name), lower(c.name) limit 6)
  union all
  (select 'check', c.id, c.number, concat_ws(', ', i.name, replace(c.condition, '-', ' '), to_char(c.begun_at at time zone l.zone, 'FMDD Mon YYYY')),
      case when lower(c.number) like p.text || '%' then 0 else 1 end, null::uuid
    from checks c join instruments i on i.lab_id = c.lab_id and i.id = c.instrument_id join labs l on l.id = c.lab_id, lab, pattern p
    where c.lab_id = lab.id and lower(c.number) like '%' || p.text || '%'
    order by 5, c.begun_at desc limit 6)
  union all
  (select 'person', m.person_id, pe.name, array_to_string(m.roles, ', '),
      case when lower(pe.name) like p.text || '%' then 0 else 1 end, null::uuid
    from memberships m join people pe on pe.id = m.person_id, lab, pattern p
    where m.lab_id = lab.id and m.ended_at is null and lower(pe.name) like '%' || p.text || '%'
    order by 5, lower(pe.name) limit 6)
$$;
--> statement-breakpoint
-- The role that owns the functions above cannot log in; it sees the few tables they need, across labs.
grant usage, create on schema public to wavekeep_definer;
grant select on labs, people, credentials, memberships, invitations, bench_devices, password_resets, instruments, configurations, checks to wavekeep_definer;
grant insert on labs, people, credentials, memberships, password_resets to wavekeep_definer;
grant update on credentials, memberships, invitations, password_resets to wavekeep_definer;
--> statement-breakpoint
drop policy if exists definer on labs;
create policy definer on labs to wavekeep_definer using (true) with check (true);
drop policy if exists definer on people;
create policy definer on people to wavekeep_definer using (true) with check (true);
drop policy if exists definer on credentials;
create policy definer on credentials to wavekeep_definer using (true) with check (true);
drop policy if exists definer on memberships;
create policy definer on memberships to wavekeep_definer using (true) with check (true);
drop policy if exists definer on invitations;
create policy definer on invitations to wavekeep_definer using (true) with check (true);
drop policy if exists definer on bench_devices;
create policy definer on bench_devices to wavekeep_definer using (true) with check (true);
drop policy if exists definer on password_resets;
create policy definer on password_resets to wavekeep_definer using (true) with check (true);
drop policy if exists definer on instruments;
create policy definer on instruments for select to wavekeep_definer using (true);
drop policy if exists definer on configurations;
create policy definer on configurations for select to wavekeep_definer using (true);
drop policy if exists definer on checks;
create policy definer on checks for select to wavekeep_definer using (true);
drop policy if exists seeds_demo_labs on labs;
create policy seeds_demo_labs on labs as restrictive to wavekeep_seeder using (is_demo) with check (is_demo);
--> statement-breakpoint
revoke all on all functions in schema public from public;
grant execute on function record_now(), trail_begin(), trail_entry_fits(), row_sha256(text, uuid), refuse_truncate() to wavekeep_app, wavekeep_definer;
--> statement-breakpoint
do $$
declare
  f regprocedure;
begin
  foreach f in array array[
    'sign_in_lookup(text)', 'own_credentials()', 'set_own_password(text)', 'set_own_pin(text)', 'my_labs()', 'labs_of_email(text)',
    'begin_reset(text, text)', 'finish_reset(text, text)', 'invitation_of(text)', 'accept_invitation(text, text, text)',
    'bench_device_of(text)', 'bench_credentials(text, uuid)', 'labs_to_visit()', 'search_lab(text)'
  ]::regprocedure[] loop
    execute format('alter function %s owner to wavekeep_definer', f);
    execute format('grant execute on function %s to wavekeep_app', f);
  end loop;
  alter function create_lab(uuid, text, text, double precision, boolean) owner to wavekeep_definer;
  execute format('grant execute on function create_lab(uuid, text, text, double precision, boolean) to wavekeep_seeder, %I', current_user);
end
$$;
--> statement-breakpoint
revoke create on schema public from wavekeep_definer;
--> statement-breakpoint
-- What belongs to no lab has its own chain and outbox under this id.
insert into labs (id, name, zone, created_at) values ('00000000-0000-7000-8000-000000000000', 'Wavekeep', 'Etc/UTC', now()) on conflict do nothing;
--> statement-breakpoint
alter table labs enable row level security;
alter table labs force row level security;
revoke all on labs from public, wavekeep_app;
grant select, update on labs to wavekeep_app;
--> statement-breakpoint
alter table people enable row level security;
alter table people force row level security;
revoke all on people from public, wavekeep_app;
grant select, update on people to wavekeep_app;
--> statement-breakpoint
alter table credentials enable row level security;
alter table credentials force row level security;
revoke all on credentials from public, wavekeep_app;
--> statement-breakpoint
alter table memberships enable row level security;
alter table memberships force row level security;
revoke all on memberships from public, wavekeep_app;
grant select, update on memberships to wavekeep_app;
--> statement-breakpoint
alter table invitations enable row level security;
alter table invitations force row level security;
revoke all on invitations from public, wavekeep_app;
grant select, insert, update on invitations to wavekeep_app;
--> statement-breakpoint
alter table deputies enable row level security;
alter table deputies force row level security;
revoke all on deputies from public, wavekeep_app;
grant select, insert on deputies to wavekeep_app;
drop trigger if exists refuse_truncate on deputies;
create trigger refuse_truncate before truncate on deputies for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table bench_devices enable row level security;
alter table bench_devices force row level security;
revoke all on bench_devices from public, wavekeep_app;
grant select, insert, update on bench_devices to wavekeep_app;
--> statement-breakpoint
revoke all on sessions from public, wavekeep_app;
grant select, insert, update, delete on sessions to wavekeep_app;
--> statement-breakpoint
alter table password_resets enable row level security;
alter table password_resets force row level security;
revoke all on password_resets from public, wavekeep_app;
--> statement-breakpoint
revoke all on rate_counters from public, wavekeep_app;
grant select, insert, update, delete on rate_counters to wavekeep_app;
--> statement-breakpoint
alter table trail_entries enable row level security;
alter table trail_entries force row level security;
revoke all on trail_entries from public, wavekeep_app;
grant select, insert on trail_entries to wavekeep_app;
drop trigger if exists refuse_truncate on trail_entries;
create trigger refuse_truncate before truncate on trail_entries for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table trail_personal enable row level security;
alter table trail_personal force row level security;
revoke all on trail_personal from public, wavekeep_app;
grant select, insert on trail_personal to wavekeep_app;
drop trigger if exists refuse_truncate on trail_personal;
create trigger refuse_truncate before truncate on trail_personal for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table signed_heads enable row level security;
alter table signed_heads force row level security;
revoke all on signed_heads from public, wavekeep_app;
grant select, insert on signed_heads to wavekeep_app;
drop trigger if exists refuse_truncate on signed_heads;
create trigger refuse_truncate before truncate on signed_heads for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table mail_outbox enable row level security;
alter table mail_outbox force row level security;
revoke all on mail_outbox from public, wavekeep_app;
grant select, insert, update on mail_outbox to wavekeep_app;
--> statement-breakpoint
alter table idempotency_keys enable row level security;
alter table idempotency_keys force row level security;
revoke all on idempotency_keys from public, wavekeep_app;
grant select, insert, update, delete on idempotency_keys to wavekeep_app;
--> statement-breakpoint
alter table procedures enable row level security;
alter table procedures force row level security;
revoke all on procedures from public, wavekeep_app;
grant select, insert on procedures to wavekeep_app;
drop trigger if exists refuse_truncate on procedures;
create trigger refuse_truncate before truncate on procedures for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table instruments enable row level security;
alter table instruments force row level security;
revoke all on instruments from public, wavekeep_app;
grant select, insert, update on instruments to wavekeep_app;
--> statement-breakpoint
alter table configurations enable row level security;
alter table configurations force row level security;
revoke all on configurations from public, wavekeep_app;
grant select, insert, update on configurations to wavekeep_app;
--> statement-breakpoint
alter table tolerance_versions enable row level security;
alter table tolerance_versions force row level security;
revoke all on tolerance_versions from public, wavekeep_app;
grant select, insert on tolerance_versions to wavekeep_app;
drop trigger if exists refuse_truncate on tolerance_versions;
create trigger refuse_truncate before truncate on tolerance_versions for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table standing_entries enable row level security;
alter table standing_entries force row level security;
revoke all on standing_entries from public, wavekeep_app;
grant select, insert on standing_entries to wavekeep_app;
drop trigger if exists refuse_truncate on standing_entries;
create trigger refuse_truncate before truncate on standing_entries for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table instrument_events enable row level security;
alter table instrument_events force row level security;
revoke all on instrument_events from public, wavekeep_app;
grant select, insert on instrument_events to wavekeep_app;
drop trigger if exists refuse_truncate on instrument_events;
create trigger refuse_truncate before truncate on instrument_events for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table axes enable row level security;
alter table axes force row level security;
revoke all on axes from public, wavekeep_app;
grant select, insert on axes to wavekeep_app;
drop trigger if exists refuse_truncate on axes;
create trigger refuse_truncate before truncate on axes for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table sources enable row level security;
alter table sources force row level security;
revoke all on sources from public, wavekeep_app;
grant select, insert, update on sources to wavekeep_app;
--> statement-breakpoint
alter table source_certificates enable row level security;
alter table source_certificates force row level security;
revoke all on source_certificates from public, wavekeep_app;
grant select, insert on source_certificates to wavekeep_app;
drop trigger if exists refuse_truncate on source_certificates;
create trigger refuse_truncate before truncate on source_certificates for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table number_counters enable row level security;
alter table number_counters force row level security;
revoke all on number_counters from public, wavekeep_app;
grant select, insert, update on number_counters to wavekeep_app;
--> statement-breakpoint
alter table checks enable row level security;
alter table checks force row level security;
revoke all on checks from public, wavekeep_app;
grant select, insert on checks to wavekeep_app;
drop trigger if exists refuse_truncate on checks;
create trigger refuse_truncate before truncate on checks for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table check_drafts enable row level security;
alter table check_drafts force row level security;
revoke all on check_drafts from public, wavekeep_app;
grant select, insert, update on check_drafts to wavekeep_app;
--> statement-breakpoint
alter table check_attempts enable row level security;
alter table check_attempts force row level security;
revoke all on check_attempts from public, wavekeep_app;
grant select, insert on check_attempts to wavekeep_app;
drop trigger if exists refuse_truncate on check_attempts;
create trigger refuse_truncate before truncate on check_attempts for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table check_contributors enable row level security;
alter table check_contributors force row level security;
revoke all on check_contributors from public, wavekeep_app;
grant select, insert on check_contributors to wavekeep_app;
drop trigger if exists refuse_truncate on check_contributors;
create trigger refuse_truncate before truncate on check_contributors for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table check_events enable row level security;
alter table check_events force row level security;
revoke all on check_events from public, wavekeep_app;
grant select, insert on check_events to wavekeep_app;
drop trigger if exists refuse_truncate on check_events;
create trigger refuse_truncate before truncate on check_events for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table capture_bytes enable row level security;
alter table capture_bytes force row level security;
revoke all on capture_bytes from public, wavekeep_app;
grant select, insert on capture_bytes to wavekeep_app;
drop trigger if exists refuse_truncate on capture_bytes;
create trigger refuse_truncate before truncate on capture_bytes for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table captures enable row level security;
alter table captures force row level security;
revoke all on captures from public, wavekeep_app;
grant select, insert on captures to wavekeep_app;
drop trigger if exists refuse_truncate on captures;
create trigger refuse_truncate before truncate on captures for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table capture_readings enable row level security;
alter table capture_readings force row level security;
revoke all on capture_readings from public, wavekeep_app;
grant select, insert on capture_readings to wavekeep_app;
drop trigger if exists refuse_truncate on capture_readings;
create trigger refuse_truncate before truncate on capture_readings for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table analyses enable row level security;
alter table analyses force row level security;
revoke all on analyses from public, wavekeep_app;
grant select, insert on analyses to wavekeep_app;
drop trigger if exists refuse_truncate on analyses;
create trigger refuse_truncate before truncate on analyses for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table analysis_drawings enable row level security;
alter table analysis_drawings force row level security;
revoke all on analysis_drawings from public, wavekeep_app;
grant select, insert on analysis_drawings to wavekeep_app;
drop trigger if exists refuse_truncate on analysis_drawings;
create trigger refuse_truncate before truncate on analysis_drawings for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table submissions enable row level security;
alter table submissions force row level security;
revoke all on submissions from public, wavekeep_app;
grant select, insert on submissions to wavekeep_app;
drop trigger if exists refuse_truncate on submissions;
create trigger refuse_truncate before truncate on submissions for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table signatures enable row level security;
alter table signatures force row level security;
revoke all on signatures from public, wavekeep_app;
grant select, insert on signatures to wavekeep_app;
drop trigger if exists refuse_truncate on signatures;
create trigger refuse_truncate before truncate on signatures for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table reports enable row level security;
alter table reports force row level security;
revoke all on reports from public, wavekeep_app;
grant select, insert on reports to wavekeep_app;
drop trigger if exists refuse_truncate on reports;
create trigger refuse_truncate before truncate on reports for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table drift_points enable row level security;
alter table drift_points force row level security;
revoke all on drift_points from public, wavekeep_app;
grant select, insert on drift_points to wavekeep_app;
drop trigger if exists refuse_truncate on drift_points;
create trigger refuse_truncate before truncate on drift_points for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table alerts enable row level security;
alter table alerts force row level security;
revoke all on alerts from public, wavekeep_app;
grant select, insert, update on alerts to wavekeep_app;
--> statement-breakpoint
alter table impact_reviews enable row level security;
alter table impact_reviews force row level security;
revoke all on impact_reviews from public, wavekeep_app;
grant select, insert on impact_reviews to wavekeep_app;
drop trigger if exists refuse_truncate on impact_reviews;
create trigger refuse_truncate before truncate on impact_reviews for each statement execute function refuse_truncate();
--> statement-breakpoint
alter table impact_decisions enable row level security;
alter table impact_decisions force row level security;
revoke all on impact_decisions from public, wavekeep_app;
grant select, insert on impact_decisions to wavekeep_app;
drop trigger if exists refuse_truncate on impact_decisions;
create trigger refuse_truncate before truncate on impact_decisions for each statement execute function refuse_truncate();
