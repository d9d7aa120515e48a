-- The log only grows; of an entry nothing changes but that its letter was written.
REVOKE UPDATE, DELETE ON water_entry FROM bowkeeper_app;--> statement-breakpoint
GRANT UPDATE (reminded_at) ON water_entry TO bowkeeper_app;--> statement-breakpoint
SELECT force_row_level_security();
