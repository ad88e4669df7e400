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
