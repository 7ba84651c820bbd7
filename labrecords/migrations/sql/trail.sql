-- The laboratory's clock: the database's own, at this instant. Only the owner role may simulate it.
CREATE FUNCTION labrecords_clock() RETURNS timestamptz LANGUAGE plpgsql VOLATILE AS $$
DECLARE
    simulated text := nullif(current_setting('labrecords.simulated_clock', true), '');
    owner name := (SELECT tableowner FROM pg_tables WHERE schemaname = 'public' AND tablename = 'labrecords_auditevent');
BEGIN
    IF simulated IS NULL THEN
        RETURN clock_timestamp();
    END IF;
    IF current_user <> owner THEN
        RAISE EXCEPTION 'only the owner of the records may set a simulated clock' USING ERRCODE = 'insufficient_privilege';
    END IF;
    RETURN simulated::timestamptz;
END $$;

-- The very first account records itself: there is nobody else to do it.
CREATE FUNCTION labrecords_first_account() RETURNS text LANGUAGE plpgsql AS $$
BEGIN
    IF EXISTS (SELECT 1 FROM labrecords_user) THEN
        RAISE EXCEPTION 'an event needs an actor with an account' USING ERRCODE = 'foreign_key_violation';
    END IF;
    RETURN 'the first account';
END $$;

-- An event is stamped by the database and becomes the open event of its transaction.
CREATE FUNCTION labrecords_stamp_event() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
    NEW.occurred_at := labrecords_clock();
    NEW.is_simulated := nullif(current_setting('labrecords.simulated_clock', true), '') IS NOT NULL;
    NEW.transaction_id := pg_current_xact_id()::text::bigint;
    SELECT full_name INTO NEW.actor_name FROM labrecords_user WHERE id = NEW.actor_id;
    IF NEW.actor_name IS NULL THEN
        NEW.actor_name := labrecords_first_account();
    END IF;
    PERFORM set_config('labrecords.event', NEW.id::text, true);
    RETURN NEW;
END $$;
CREATE TRIGGER stamp_event BEFORE INSERT ON labrecords_auditevent
    FOR EACH ROW EXECUTE FUNCTION labrecords_stamp_event();

-- The open event of this transaction, or nothing.
CREATE FUNCTION labrecords_open_event() RETURNS bigint LANGUAGE sql STABLE AS $$
    SELECT id FROM labrecords_auditevent
    WHERE id = nullif(current_setting('labrecords.event', true), '')::bigint
      AND transaction_id = pg_current_xact_id()::text::bigint
$$;

-- A row as text values, so that every digit is kept; bulky or secret columns as their SHA-256.
CREATE FUNCTION labrecords_row_as_text(whole jsonb, hashed text[]) RETURNS jsonb LANGUAGE sql IMMUTABLE AS $$
    SELECT jsonb_object_agg(key, CASE
        WHEN value IS NOT NULL AND key = ANY (hashed)
        THEN 'sha256:' || encode(sha256(convert_to(value, 'UTF8')), 'hex')
        ELSE value END)
    FROM jsonb_each_text(whole)
$$;

-- Every change of a record is written under the open event; without one there is no change.
CREATE FUNCTION labrecords_write_change() RETURNS trigger LANGUAGE plpgsql SECURITY DEFINER
SET search_path = public, pg_temp AS $$
DECLARE
    event bigint := labrecords_open_event();
    hashed text[] := ARRAY['content', 'inputs', 'outputs', 'volumes', 'readings', 'password'];
    old_row jsonb;
    new_row jsonb;
    old_part jsonb;
    new_part jsonb;
    record_key text;
BEGIN
    IF event IS NULL THEN
        RAISE EXCEPTION 'no event, no change: % on % outside an audit event', TG_OP, TG_TABLE_NAME
            USING ERRCODE = 'insufficient_privilege';
    END IF;
    IF TG_OP <> 'INSERT' THEN
        old_row := labrecords_row_as_text(to_jsonb(OLD), hashed);
    END IF;
    IF TG_OP <> 'DELETE' THEN
        new_row := labrecords_row_as_text(to_jsonb(NEW), hashed);
    END IF;
    record_key := coalesce(new_row, old_row) ->> 'id';
    IF TG_OP = 'UPDATE' THEN
        SELECT jsonb_object_agg(key, value) INTO old_part
            FROM jsonb_each(old_row) WHERE value IS DISTINCT FROM new_row -> key;
        IF old_part IS NULL THEN
            RETURN NULL;
        END IF;
        SELECT jsonb_object_agg(key, new_row -> key) INTO new_part FROM jsonb_object_keys(old_part) AS key;
    ELSE
        old_part := old_row;
        new_part := new_row;
    END IF;
    INSERT INTO labrecords_auditchange (event_id, table_name, record_key, operation, before, after)
        VALUES (event, TG_TABLE_NAME, record_key, TG_OP, old_part, new_part);
    RETURN NULL;
END $$;

-- What is only ever added: refuse everything else, whoever asks.
CREATE FUNCTION labrecords_refuse() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
    RAISE EXCEPTION '% on % is refused: these rows are only ever added', TG_OP, TG_TABLE_NAME
        USING ERRCODE = 'insufficient_privilege';
END $$;

-- Protect one table. kind: record (changes are written under events), fixed (the same, and never updated),
-- trail (only ever added). The application role gets no more than that needs, and never DELETE or TRUNCATE.
CREATE FUNCTION labrecords_protect(table_name text, kind text, app_role text) RETURNS void LANGUAGE plpgsql AS $$
BEGIN
    EXECUTE format('GRANT SELECT ON %I TO %I', table_name, app_role);
    IF table_name <> 'labrecords_auditchange' THEN
        EXECUTE format('GRANT INSERT ON %I TO %I', table_name, app_role);
    END IF;
    IF kind = 'record' THEN
        EXECUTE format('GRANT UPDATE ON %I TO %I', table_name, app_role);
    END IF;
    IF kind IN ('record', 'fixed') THEN
        EXECUTE format('CREATE TRIGGER write_change AFTER INSERT OR UPDATE OR DELETE ON %I'
            ' FOR EACH ROW EXECUTE FUNCTION labrecords_write_change()', table_name);
    END IF;
    IF kind IN ('fixed', 'trail') THEN
        EXECUTE format('CREATE TRIGGER refuse_change BEFORE UPDATE OR DELETE ON %I'
            ' FOR EACH ROW EXECUTE FUNCTION labrecords_refuse()', table_name);
    ELSE
        EXECUTE format('CREATE TRIGGER refuse_delete BEFORE DELETE ON %I'
            ' FOR EACH ROW EXECUTE FUNCTION labrecords_refuse()', table_name);
    END IF;
    EXECUTE format('CREATE TRIGGER refuse_truncate BEFORE TRUNCATE ON %I'
        ' FOR EACH STATEMENT EXECUTE FUNCTION labrecords_refuse()', table_name);
END $$;
