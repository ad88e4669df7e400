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
