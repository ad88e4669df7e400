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
