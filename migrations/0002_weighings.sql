-- A gross weight in a cylinder's register line was read when the line was
-- written: what moved by then is in it, what moved later is not. Lines of
-- schema 1 do not say so, and their weighings counted from the line's first
-- day. Lines dated to another day than they were written on are left as they are.
--
-- Each line is looked at beside the one written before it, as schema 1 left both.

UPDATE cylinder_versions
SET facts = json_set(facts, '$.weighed', json_object(
    'at', json_object(
        'date', date(written / 1000, 'unixepoch'),
        'minute', CAST(strftime('%H', written / 1000, 'unixepoch') AS INTEGER) * 60
            + CAST(strftime('%M', written / 1000, 'unixepoch') AS INTEGER)),
    'instant', strftime('%Y-%m-%dT%H:%M:00Z', written / 1000, 'unixepoch'),
    'after', coalesce((SELECT max(e.position) FROM entries e WHERE e.written <= cylinder_versions.written), 0)))
WHERE json_extract(facts, '$.gross') IS NOT NULL
    AND coalesce(valid_from, date(written / 1000, 'unixepoch')) = date(written / 1000, 'unixepoch')
    AND json_extract(facts, '$.gross') IS NOT (
        SELECT json_extract(before.facts, '$.gross') FROM cylinder_versions before
        WHERE before.cylinder = cylinder_versions.cylinder AND before.position < cylinder_versions.position
        ORDER BY before.position DESC LIMIT 1);
