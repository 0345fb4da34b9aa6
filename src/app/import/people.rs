//! People and their certificates. A certificate is told from another one by
//! the day from which it is valid.

use super::columns::differences;
use super::registers::{Line, changed, one_a_day};
use super::{ImportError, Imported};
use crate::app::App;
use crate::exchange::csv::{BadLine, PersonRow};
use crate::ledger::{Dated, Person, PersonId, Versions};
use crate::store::Writing;
use std::collections::BTreeMap;

pub(super) fn take(
    tx: &Writing<'_>,
    app: &App,
    rows: &[PersonRow],
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<(), ImportError> {
    let registers = tx.registers()?;
    let mut groups: BTreeMap<&str, Vec<&PersonRow>> = BTreeMap::new();
    for row in rows.iter().filter(|row| !row.name.is_empty()) {
        groups.entry(&row.name).or_default().push(row);
    }
    for (name, rows) in groups {
        let known = registers.person_named(name).map(|person| person.id);
        let id = known.unwrap_or_else(|| PersonId(app.new_id()));
        let lines = rows.into_iter().map(|row| Line {
            file: row.file.as_str(),
            line: row.line,
            sound: row.sound,
            from: row.valid_from,
            facts: person(id, row),
        });
        let lines = one_a_day(lines.collect(), bad);
        match known.map(|id| tx.person_versions(id)).transpose()?.flatten() {
            Some(versions) => further(tx, &versions, lines, bad)?,
            None => {
                for (number, line) in lines.into_iter().enumerate() {
                    if number == 0 {
                        tx.add_person(&line.facts)?;
                        taken.people += 1;
                    } else {
                        tx.add_person_version(&version(line.facts))?;
                    }
                }
            }
        }
    }
    Ok(())
}

/// Lines of a person whom the store has.
fn further(tx: &Writing<'_>, versions: &Versions<Person>, lines: Vec<Line<'_, Person>>, bad: &mut Vec<BadLine>) -> Result<(), ImportError> {
    // A person known only from a log has a name and nothing else yet.
    let held: Vec<&Person> = versions.all().iter().map(|version| &version.facts).filter(|person| !is_bare(person)).collect();
    for line in lines {
        let of_its_day = held.iter().rev().find(|person| person.valid_from == line.from);
        let against = match of_its_day {
            Some(person) if line.from.is_some() || differences(*person, &line.facts).is_empty() => Some(*person),
            _ if line.from.is_none() => held.last().copied(),
            _ => None,
        };
        if let Some(person) = against {
            bad.extend(changed(person, &line));
            continue;
        }
        // The first certificate holds from the beginning until one is dated before it: then from its own day.
        let first = versions.first();
        if first.from.is_none() && first.facts.valid_from.is_some() && line.from < first.facts.valid_from {
            tx.add_person_version(&version(first.facts.clone()))?;
        }
        tx.add_person_version(&version(line.facts))?;
    }
    Ok(())
}

fn version(person: Person) -> Dated<Person> {
    Dated { from: person.valid_from, reason: Some("import".to_owned()), facts: person }
}

fn is_bare(person: &Person) -> bool {
    let texts = [&person.certificate, &person.certificate_kind, &person.company, &person.company_certificate];
    texts.into_iter().all(String::is_empty) && person.valid_from.is_none() && person.valid_to.is_none()
}

fn person(id: PersonId, row: &PersonRow) -> Person {
    Person {
        id,
        name: row.name.clone(),
        certificate: row.certificate.clone(),
        certificate_kind: row.certificate_kind.clone(),
        valid_from: row.valid_from,
        valid_to: row.valid_to,
        company: row.company.clone(),
        company_certificate: row.company_certificate.clone(),
    }
}
