-- Frozen states are frozen by the database too.
-- First argument: allowed transitions "a>b,b>c"; then, per state, the columns that may still change ("*": all).
CREATE FUNCTION labrecords_guard_states() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
    allowed text;
    changed text;
BEGIN
    IF NEW.state <> OLD.state AND NOT (OLD.state || '>' || NEW.state) = ANY (string_to_array(TG_ARGV[0], ',')) THEN
        RAISE EXCEPTION '% % cannot go from "%" to "%"', TG_TABLE_NAME, OLD.id, OLD.state, NEW.state
            USING ERRCODE = 'check_violation';
    END IF;
    FOR position IN 1 .. TG_NARGS - 1 LOOP
        IF split_part(TG_ARGV[position], ':', 1) = OLD.state THEN
            allowed := split_part(TG_ARGV[position], ':', 2);
        END IF;
    END LOOP;
    IF allowed IS NULL THEN
        RAISE EXCEPTION '% % is in the unknown state "%"', TG_TABLE_NAME, OLD.id, OLD.state;
    END IF;
    IF allowed = '*' THEN
        RETURN NEW;
    END IF;
    SELECT key INTO changed FROM jsonb_each(to_jsonb(OLD))
        WHERE value IS DISTINCT FROM to_jsonb(NEW) -> key AND NOT key = ANY (string_to_array(allowed, ',')) LIMIT 1;
    IF changed IS NOT NULL THEN
        RAISE EXCEPTION '% % is %: its % is frozen', TG_TABLE_NAME, OLD.id, OLD.state, changed
            USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
END $$;

-- What belongs to a run or a standardization may be added or changed only while that one is open.
CREATE FUNCTION labrecords_parent_is_open() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
    parent_state text;
BEGIN
    IF TG_OP = 'UPDATE' AND (NEW.run_id IS DISTINCT FROM OLD.run_id
            OR NEW.standardization_id IS DISTINCT FROM OLD.standardization_id) THEN
        RAISE EXCEPTION '% % cannot move to another record', TG_TABLE_NAME, OLD.id USING ERRCODE = 'check_violation';
    END IF;
    IF NEW.run_id IS NOT NULL THEN
        SELECT state INTO parent_state FROM labrecords_run WHERE id = NEW.run_id;
    ELSE
        SELECT state INTO parent_state FROM labrecords_standardization WHERE id = NEW.standardization_id;
    END IF;
    IF parent_state <> 'open' THEN
        RAISE EXCEPTION '% belongs to a record that is %, not open', TG_TABLE_NAME, parent_state
            USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
END $$;
CREATE TRIGGER parent_is_open BEFORE INSERT OR UPDATE ON labrecords_replicate
    FOR EACH ROW EXECUTE FUNCTION labrecords_parent_is_open();
CREATE TRIGGER parent_is_open BEFORE INSERT OR UPDATE ON labrecords_usedinstrument
    FOR EACH ROW EXECUTE FUNCTION labrecords_parent_is_open();
CREATE TRIGGER parent_is_open BEFORE INSERT ON labrecords_calculation
    FOR EACH ROW EXECUTE FUNCTION labrecords_parent_is_open();

-- Who entered a replicate stays who entered it; an exclusion stays.
CREATE FUNCTION labrecords_replicate_keeps() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
    IF NEW.number <> OLD.number OR NEW.kind <> OLD.kind OR NEW.entered_by_id <> OLD.entered_by_id THEN
        RAISE EXCEPTION 'a replicate keeps its number, its kind and who entered it' USING ERRCODE = 'check_violation';
    END IF;
    IF OLD.is_excluded AND to_jsonb(NEW) <> to_jsonb(OLD) THEN
        RAISE EXCEPTION 'an excluded replicate stays as it is' USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
END $$;
CREATE TRIGGER replicate_keeps BEFORE UPDATE ON labrecords_replicate
    FOR EACH ROW EXECUTE FUNCTION labrecords_replicate_keeps();

-- Limits belong to a draft.
CREATE FUNCTION labrecords_specification_is_draft() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
    parent_state text;
BEGIN
    SELECT state INTO parent_state FROM labrecords_specification WHERE id = NEW.specification_id;
    IF parent_state <> 'draft' THEN
        RAISE EXCEPTION 'the specification is %, its limits are frozen', parent_state USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
END $$;
CREATE TRIGGER specification_is_draft BEFORE INSERT OR UPDATE ON labrecords_specificationlimit
    FOR EACH ROW EXECUTE FUNCTION labrecords_specification_is_draft();

-- A signature is stamped by the database and made by the actor of the open event.
CREATE FUNCTION labrecords_stamp_signature() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
    actor bigint;
BEGIN
    SELECT actor_id INTO actor FROM labrecords_auditevent WHERE id = labrecords_open_event();
    IF actor IS DISTINCT FROM NEW.signer_id THEN
        RAISE EXCEPTION 'a signature is made by the person who acts' USING ERRCODE = 'insufficient_privilege';
    END IF;
    SELECT full_name INTO STRICT NEW.printed_name FROM labrecords_user WHERE id = NEW.signer_id;
    NEW.signed_at := labrecords_clock();
    NEW.content_sha256 := encode(sha256(convert_to(NEW.content, 'UTF8')), 'hex');
    RETURN NEW;
END $$;
CREATE TRIGGER stamp_signature BEFORE INSERT ON labrecords_signature
    FOR EACH ROW EXECUTE FUNCTION labrecords_stamp_signature();

-- Numbers only ever go up by one.
CREATE FUNCTION labrecords_number_counts() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
    IF NEW.series <> OLD.series OR NEW.year <> OLD.year OR NEW.last <> OLD.last + 1 THEN
        RAISE EXCEPTION 'numbers of a series go up by one' USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
END $$;
CREATE TRIGGER number_counts BEFORE UPDATE ON labrecords_numberseries
    FOR EACH ROW EXECUTE FUNCTION labrecords_number_counts();
