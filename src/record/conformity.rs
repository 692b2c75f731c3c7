//! Whether acts conform to roster, policy, people and the order of things.

use super::act::{Act, Meaning, SignedAct};
use super::fault::Fault;
use super::finding::Part;
use super::roster::{Roster, Standing};
use super::verification::Authority;

/// What is wrong with the signature of an act, by the roster and the act's own time.
pub(super) fn signature_faults(signed: &SignedAct, roster: &Roster) -> Vec<Fault> {
    let act = signed.act();
    let signer = act.signer.clone();
    let key = match signed.signature().public_key() {
        Ok(key) => key,
        Err(fault) => return vec![Fault::SignatureWrong(fault)],
    };
    let mut faults = Vec::new();
    if let Err(fault) = signed.signature().verify(act.print().as_bytes(), &key) {
        faults.push(Fault::SignatureWrong(fault));
    }
    match roster.standing(&signer, &key, act.time) {
        Standing::Valid => {}
        Standing::UnknownSigner => faults.push(Fault::SignerNotOnRoster { signer }),
        Standing::UnknownKey => faults.push(Fault::KeyNotOnRoster {
            signer,
            fingerprint: key.fingerprint(),
        }),
        Standing::NotYet(from) => faults.push(Fault::KeyOutsideDates { signer, from }),
        Standing::Retired(at) => faults.push(Fault::KeyRetired { signer, at }),
    }
    faults
}

/// What is wrong with who signed, by people and policy, and with the time of an act by the verifier's.
pub(super) fn person_faults(act: &Act, authority: &Authority<'_>) -> Vec<Fault> {
    let Authority { policy, people, .. } = *authority;
    let mut faults = Vec::new();
    if act.time > authority.now {
        faults.push(Fault::TimeToCome { time: act.time });
    }
    if !policy.authorises(people, &act.signer, act.meaning) {
        let signer = act.signer.clone();
        let meaning = act.meaning;
        faults.push(Fault::NotAuthorised { signer, meaning });
    }
    let mut known = people.iter().filter(|person| person.signer == act.signer);
    if let Some(person) = known.next()
        && person.name != act.name
    {
        let (printed, given) = (act.name.clone(), person.name.clone());
        faults.push(Fault::NameDiffers { printed, given });
    }
    faults
}

/// What is wrong with the order of the acts below a record.
pub(super) fn order_faults(acts: &[&Act]) -> Vec<(Part, Fault)> {
    let mut faults = Vec::new();
    for (act, place) in acts.iter().zip(1..) {
        let mut find = |fault| faults.push((Part::Act(place), fault));
        let found = act.meaning;
        match (place, found) {
            (1, Meaning::Performed) => {}
            (1, _) => find(Fault::FirstActNotPerformed { found }),
            (_, Meaning::Performed) => find(Fault::ActOutOfPlace { found }),
            _ if !found.is_of_a_page() => find(Fault::ActOutOfPlace { found }),
            _ => {}
        }
        let earlier = || acts.iter().take(place - 1);
        if earlier().any(|other| other == act || other.meaning == Meaning::Withdrawn) {
            find(Fault::ActOutOfPlace { found });
        }
        let before = earlier().map(|act| act.time).max();
        if let Some(before) = before.filter(|before| act.time < *before) {
            let time = act.time;
            find(Fault::ClockRanBack { time, before });
        }
        let signer = act.signer.clone();
        match found {
            Meaning::Rejected => find(Fault::Rejected { signer }),
            Meaning::Withdrawn => find(Fault::Withdrawn { signer }),
            _ => {}
        }
    }
    faults
}

/// What the policy asks of the acts below a record and does not find.
///
/// An act that the policy forbids (own review) or keeps for other roles does not count as done. A withdrawn record
/// needs nothing further.
pub(super) fn policy_faults(acts: &[&Act], authority: &Authority<'_>) -> Vec<(Part, Fault)> {
    let Authority {
        policy,
        people,
        now,
        ..
    } = *authority;
    let done = |act: &&&Act| act.meaning == Meaning::Performed;
    let Some(performed) = acts.iter().find(done) else {
        return Vec::new();
    };
    let is_own = |act: &Act| policy.forbids_own(&performed.signer, &act.signer, act.meaning);
    let mut faults = Vec::new();
    for (act, place) in acts.iter().zip(1..).filter(|(act, _)| is_own(act)) {
        let (signer, meaning) = (act.signer.clone(), act.meaning);
        faults.push((Part::Act(place), Fault::OwnReview { signer, meaning }));
    }
    if acts.iter().any(|act| act.meaning == Meaning::Withdrawn) {
        return faults;
    }
    let elapsed = (now - performed.time).num_days();
    let late = policy.due_days.map(|due| elapsed - i64::from(due));
    for meaning in policy.required.iter().copied() {
        let fulfils = |act: &&&Act| {
            act.meaning == meaning
                && !is_own(act)
                && policy.authorises(people, &act.signer, meaning)
        };
        if acts.iter().find(fulfils).is_none() {
            let fault = match late {
                Some(days) if days > 0 => Fault::Overdue { meaning, days },
                _ => Fault::RequiredActMissing { meaning },
            };
            faults.push((Part::Whole, fault));
        }
    }
    faults
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::signature::Signer as _;
    use crate::record::specimen::{Laboratory, key, name, names, page, statement, time};

    fn found(change: impl FnOnce(&mut Laboratory)) -> Vec<&'static str> {
        let mut laboratory = Laboratory::new();
        let sealed = laboratory.seal(&statement(), "analyst", "2026-11-03T10:12:45+01:00");
        change(&mut laboratory);
        names(&laboratory.verify(&page(&[&sealed])).findings)
    }

    #[test]
    fn the_roster_judges_by_the_time_of_the_act() {
        let retire = |laboratory: &mut Laboratory, at: &str| {
            let key = key("analyst").public_key().clone();
            laboratory
                .roster
                .retire(&name("analyst"), &key, time(at))
                .unwrap();
        };
        assert_eq!(found(|l| retire(l, "2026-11-03T10:12:45+01:00")), [""; 0]);
        assert_eq!(
            found(|l| retire(l, "2026-11-03T10:12:44+01:00")),
            ["key-retired"]
        );
        let late = |l: &mut Laboratory| {
            l.roster = Roster::default();
            let key = key("analyst").public_key().clone();
            l.roster
                .enrol(name("analyst"), key, time("2026-11-04T00:00:00Z"))
                .unwrap();
        };
        assert_eq!(found(|l| late(l)), ["key-outside-dates"]);
        assert_eq!(
            found(|l| l.roster = Roster::default()),
            ["signer-not-on-roster"]
        );
        let other = |l: &mut Laboratory| {
            l.roster = Roster::default();
            let key = key("stranger").public_key().clone();
            l.roster
                .enrol(name("analyst"), key, time("2026-01-01T00:00:00Z"))
                .unwrap();
        };
        assert_eq!(found(|l| other(l)), ["key-not-on-roster"]);
    }

    #[test]
    fn the_policy_is_a_warning_and_no_failure() {
        let require = |l: &mut Laboratory, days| {
            l.policy.required.insert(Meaning::Reviewed);
            l.policy.due_days = days;
        };
        assert_eq!(found(|l| require(l, None)), ["required-act-missing"]);
        assert_eq!(found(|l| require(l, Some(6))), ["required-act-missing"]);
        assert_eq!(found(|l| require(l, Some(5))), ["overdue"]);
        let role = |l: &mut Laboratory| {
            let roles = l.people[1].roles.clone();
            l.policy.reserved.insert(Meaning::Performed, roles);
        };
        assert_eq!(found(|l| role(l)), ["not-authorised"]);
        let rename = |l: &mut Laboratory| l.people[0].name = l.people[1].name.clone();
        assert_eq!(found(|l| rename(l)), ["name-differs"]);
        assert_eq!(
            found(|l| l.now = time("2026-11-01T00:00:00Z")),
            ["time-to-come"]
        );
    }

    #[test]
    fn nothing_follows_a_withdrawal_and_nothing_stands_twice() {
        let mut laboratory = Laboratory::new();
        let sealed = laboratory.seal(&statement(), "analyst", "2026-11-03T10:12:45+01:00");
        let verified = laboratory.verify(&page(&[&sealed])).verified.unwrap();
        let mut act = |meaning, at| {
            let act = laboratory
                .try_countersign(&verified, meaning, ("reviewer", at))
                .unwrap();
            laboratory.keep(&act);
            act
        };
        let reviewed = act(Meaning::Reviewed, "2026-11-04T10:00:00+01:00");
        let withdrawn = act(Meaning::Withdrawn, "2026-11-05T10:00:00+01:00");
        let found = |acts: &[_]| names(&laboratory.verify(&page(acts)).findings);
        assert_eq!(found(&[&sealed, &reviewed, &withdrawn]), ["withdrawn"]);
        assert_eq!(
            found(&[&sealed, &reviewed, &reviewed]),
            ["act-out-of-place"]
        );
        let after = found(&[&sealed, &withdrawn, &reviewed]);
        assert_eq!(after, ["withdrawn", "act-out-of-place", "clock-ran-back"]);
        let first = found(&[&reviewed, &sealed]);
        assert_eq!(
            first,
            [
                "first-act-not-performed",
                "act-out-of-place",
                "clock-ran-back"
            ]
        );
    }
}
