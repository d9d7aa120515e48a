/**
 * What the application's role may do with the queue. graphile-worker's own tables stay closed to it
 * (they belong to bowkeeper_queue); these functions run with their owner's rights and are the only
 * door. They live in a schema of their own, also owned by bowkeeper_queue. Run after graphile-worker's
 * own migration, at each migration; every statement may be repeated.
 */
export const queueSql = `
create schema if not exists queue;
grant usage on schema queue to bowkeeper_app;

create or replace function queue.add_job(
	task text, payload json, run_at timestamptz default null, job_key text default null,
	queue_name text default null, max_attempts int default 25
) returns bigint language sql security definer set search_path = pg_catalog, pg_temp as $$
	select id from graphile_worker.add_job(
		identifier => task, payload => payload, queue_name => queue_name, run_at => run_at,
		max_attempts => max_attempts, job_key => job_key)
$$;

create or replace function queue.list_jobs(only_failed boolean, most int, skip int) returns table (
	id bigint, task text, payload json, attempts int, max_attempts int, run_at timestamptz,
	last_error text, created_at timestamptz, running boolean
) language sql stable security definer set search_path = pg_catalog, pg_temp as $$
	select j.id, t.identifier, j.payload, j.attempts::int, j.max_attempts::int, j.run_at,
		j.last_error, j.created_at, j.locked_at is not null
	from graphile_worker._private_jobs j join graphile_worker._private_tasks t on t.id = j.task_id
	where not only_failed or j.last_error is not null
	order by (j.attempts >= j.max_attempts) desc, j.run_at, j.id
	limit most offset skip
$$;

create or replace function queue.retry_job(job_id bigint) returns boolean
language plpgsql security definer set search_path = pg_catalog, pg_temp as $$
declare found_job boolean;
begin
	-- At least one more try is left, whatever the job has used up.
	update graphile_worker._private_jobs j
		set run_at = now(), max_attempts = greatest(j.max_attempts, j.attempts + 1), updated_at = now()
		where j.id = job_id and j.locked_at is null
		returning true into found_job;
	perform pg_notify('jobs:insert', '{"r":"queue.retry_job","count":1}');
	return coalesce(found_job, false);
end $$;

create or replace function queue.health() returns table (
	waiting bigint, failed bigint, given_up bigint, oldest_due_seconds double precision
) language sql stable security definer set search_path = pg_catalog, pg_temp as $$
	select count(*) filter (where attempts < max_attempts),
		count(*) filter (where last_error is not null and attempts < max_attempts),
		count(*) filter (where attempts >= max_attempts and locked_at is null),
		coalesce(extract(epoch from now() - min(run_at) filter (
			where run_at <= now() and attempts < max_attempts and locked_at is null)), 0)
	from graphile_worker._private_jobs
$$;

revoke all on all functions in schema queue from public;
grant execute on all functions in schema queue to bowkeeper_app;
`;
