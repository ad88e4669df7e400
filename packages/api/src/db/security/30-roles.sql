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
