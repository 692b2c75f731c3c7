//! Records checked with the real `ssh-keygen` and `sha256sum`, and signatures of `ssh-keygen` checked by the program.
//!
//! Where the tools are absent that is said aloud and nothing is tried; where `CI` is `true` the trials fail.

#![expect(
    clippy::indexing_slicing,
    clippy::unwrap_used,
    reason = "a trial that cannot be set up fails, and says where"
)]

mod kinds;
mod laboratory;
mod shell;

use std::process::{Command, Stdio};

use ionfolio::page::{Page, Written};
use ionfolio::record::{
    KeyError, KeyFile, Lock, PublicKey, Roster, Signature, SignatureFault, Signer, SigningError,
    Standing, Statement,
};
use laboratory::{
    ANSWER, QUESTION, REVIEWER, SIGNER, judged, key, key_bytes, page, reviewed, roster, sealed,
    signer, time,
};
use libtest_mimic::{Arguments, Trial};
use shell::Shell;

/// The lines that the documentation gives for reading a page cold, word for word.
const RECIPE: &str = r"tr -d '\r' < page.md > p
sed -n '/^```equilibrium$/,/^```$/p' p | sed '1d;$d' > q
sed -n '/^<!-- ionfolio result rb-118 -->$/,/^```record$/p' p | sed '1d;$d' | sed '$d' > a
sed -n '/^```record$/,/^```$/p' p | sed '1d;$d' > r
sed -n '/^```act$/,/^-----BEGIN/p' p | sed '1d;$d' > t
sed -n '/^-----BEGIN/,/^-----END/p' p > s
sha256sum q a r
ssh-keygen -Y verify -f roster -I bench.analyst -n ionfolio -s s < t
";

const VERIFY: &str = "ssh-keygen -Y verify -f roster -I bench.analyst -n ionfolio -s s < t";

fn main() {
    let absent: Vec<&str> = ["ssh-keygen", "sha256sum"]
        .into_iter()
        .filter(|tool| !is_there(tool))
        .collect();
    #[expect(
        clippy::disallowed_methods,
        reason = "only here may a missing tool be a failure or not"
    )]
    let obliged = std::env::var("CI").is_ok_and(|value| value == "true");
    if !absent.is_empty() && !obliged {
        say_absent(&absent);
        return;
    }
    let trials = trials().into_iter().map(|(name, trial)| {
        let run = move || {
            trial();
            Ok(())
        };
        Trial::test(name, run)
    });
    libtest_mimic::run(&Arguments::from_args(), trials.collect()).exit();
}

fn trials() -> [(&'static str, fn()); 12] {
    [
        ("a_page_is_read_cold", a_page_is_read_cold),
        (
            "a_countersigned_page_is_read_cold",
            a_countersigned_page_is_read_cold,
        ),
        (
            "a_page_as_the_program_writes_it_is_read_cold",
            a_page_as_the_program_writes_it_is_read_cold,
        ),
        (
            "a_security_key_signs_for_both",
            kinds::a_security_key_signs_for_both,
        ),
        (
            "a_short_ecdsa_signature_fits_in_both",
            kinds::a_short_ecdsa_signature_fits_in_both,
        ),
        ("a_changed_byte_fails_in_both", a_changed_byte_fails_in_both),
        (
            "a_signature_of_ssh_keygen_is_taken",
            a_signature_of_ssh_keygen_is_taken,
        ),
        (
            "another_namespace_is_refused_by_both",
            another_namespace_is_refused_by_both,
        ),
        (
            "dates_of_the_roster_mean_the_same_to_both",
            dates_of_the_roster_mean_the_same_to_both,
        ),
        (
            "keys_made_here_open_in_ssh_keygen",
            keys_made_here_open_in_ssh_keygen,
        ),
        ("keys_of_ssh_keygen_open_here", keys_of_ssh_keygen_open_here),
        (
            "a_stored_page_of_version_1_stays_good",
            a_stored_page_of_version_1_stays_good,
        ),
    ]
}

#[expect(
    clippy::print_stderr,
    reason = "a trial that was not made must not pass in silence"
)]
fn say_absent(tools: &[&str]) {
    eprintln!(
        "interoperation: NOT TRIED, for want of {}; nothing is shown about it here",
        tools.join(" and ")
    );
}

fn is_there(tool: &str) -> bool {
    let mut command = Command::new(tool);
    command.arg("--help").stdin(Stdio::null());
    command
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .status()
        .is_ok()
}

fn a_page_is_read_cold() {
    for name in ["ed25519", "ecdsa"] {
        let key = key(name);
        let sealed = sealed(&key);
        let shell = Shell::new();
        shell.put("roster", roster(&[(SIGNER, &key)]).print());
        let lf = page(&[&sealed]);
        for text in [lf.replace('\n', "\r\n"), lf] {
            shell.put("page.md", text);
            let printed = shell.run(RECIPE);
            assert_digests(&shell, &printed);
            assert!(
                printed.contains("Good \"ionfolio\" signature for bench.analyst"),
                "{printed}"
            );
        }
    }
}

/// The digests that `sha256sum` printed must stand in the record and the act.
fn assert_digests(shell: &Shell, printed: &str) {
    let (record, act) = (shell.read("r"), shell.read("t"));
    let digest = |file: &str| {
        let line = printed
            .lines()
            .find(|line| line.ends_with(&format!("  {file}")));
        line.unwrap().split(' ').next().unwrap().to_owned()
    };
    assert!(
        record.contains(&format!("\nquestion: sha256:{}\n", digest("q"))),
        "{printed}"
    );
    assert!(
        record.contains(&format!("\nanswer: sha256:{}\n", digest("a"))),
        "{printed}"
    );
    assert!(
        act.contains(&format!("\nrecord: sha256:{}\n", digest("r"))),
        "{printed}"
    );
}

fn a_countersigned_page_is_read_cold() {
    let (performer, reviewer) = (key("ed25519"), key("ecdsa"));
    let roster = roster(&[(SIGNER, &performer), (REVIEWER, &reviewer)]);
    let first = sealed(&performer);
    let second = reviewed(&first, &roster, &reviewer);
    let shell = Shell::new();
    shell.put("roster", roster.print());
    shell.put("page.md", page(&[&first, &second]));
    // Each further act: drop what stands before it, then the same lines.
    let printed = shell.run(
        r"sed '1,/^-----END/d' page.md > p
sed -n '/^```act$/,/^-----BEGIN/p' p | sed '1d;$d' > t
sed -n '/^-----BEGIN/,/^-----END/p' p > s
ssh-keygen -Y verify -f roster -I bench.reviewer -n ionfolio -s s < t",
    );
    assert!(printed.starts_with("Good"), "{printed}");
}

/// Placed by `page`, and read back by it: the same bytes for the tools and for verification.
fn a_page_as_the_program_writes_it_is_read_cold() {
    let key = key("ed25519");
    let sealed = sealed(&key);
    let roster = roster(&[(SIGNER, &key)]);
    let bare = format!("# Rinse\n\n```equilibrium\n{QUESTION}```\n\nPut on the shelf.\n");
    let bare = Page::read(bare.into_bytes()).unwrap();
    let acts = vec![sealed.act.print()];
    let written = Written::sealed("rb-118", ANSWER, &sealed.record, acts).unwrap();
    let edit = bare.placing(&bare.blocks()[0], &written).unwrap();
    let bytes = bare.with(vec![edit]).unwrap();
    let shell = Shell::new();
    shell.put("roster", roster.print());
    shell.put("page.md", &bytes);
    let printed = shell.run(RECIPE);
    assert_digests(&shell, &printed);
    assert!(printed.contains("Good \"ionfolio\" signature"), "{printed}");
    let page = Page::read(bytes).unwrap();
    let region = &page.results()[0];
    assert_eq!(page.blocks()[0].content().text(), shell.read("q"));
    assert_eq!(region.answer().text(), shell.read("a"));
    let record = region.record().unwrap().content.text();
    let act = region.acts()[0].content.text().to_owned();
    assert_eq!(act, format!("{}{}", shell.read("t"), shell.read("s")));
    let verification = judged(record.as_bytes(), &[act], &roster);
    assert_eq!(verification.findings, []);
}

/// One changed byte in each line of the act, and in each line of the signature.
fn a_changed_byte_fails_in_both() {
    let key = key("ecdsa");
    let sealed = sealed(&key);
    let roster = roster(&[(SIGNER, &key)]);
    let shell = Shell::new();
    shell.put("roster", roster.print());
    let act = sealed.act.print();
    let (lines, armour) = act.split_at(act.find("-----BEGIN").unwrap());
    shell.put("t", lines);
    shell.put("s", armour);
    assert!(shell.succeeds(VERIFY));
    let mut at = 0;
    for line in act.split_inclusive('\n') {
        let mut bytes = act.clone().into_bytes();
        bytes[at + line.len() / 2] ^= 1;
        at += line.len();
        let changed = String::from_utf8(bytes).unwrap();
        let (lines, armour) = changed.split_at(lines.len());
        shell.put("t", lines);
        shell.put("s", armour);
        assert!(!shell.succeeds(VERIFY), "{changed}");
        let verification = judged(sealed.record.as_bytes(), &[changed], &roster);
        assert!(verification.verified.is_none(), "{line}");
    }
}

/// A key that `ssh-keygen` holds.
struct Keygen {
    shell: Shell,
    key: PublicKey,
}

impl Keygen {
    fn new(name: &str) -> Self {
        let shell = Shell::new();
        shell.put_key("key", key_bytes(name));
        let public = key(name).public_key().print();
        shell.put("key.pub", &public);
        Self {
            shell,
            key: PublicKey::parse(&public).unwrap(),
        }
    }
}

impl Signer for Keygen {
    fn public_key(&self) -> &PublicKey {
        &self.key
    }

    fn sign(&self, namespace: &str, message: &[u8]) -> Result<Signature, SigningError> {
        self.shell.put("message", message);
        let sign = format!("ssh-keygen -Y sign -f key -n {namespace} < message");
        Ok(Signature::parse(&self.shell.run(&sign))?)
    }
}

fn a_signature_of_ssh_keygen_is_taken() {
    for name in ["ed25519", "ecdsa"] {
        let keygen = Keygen::new(name);
        let sealed = sealed(&keygen);
        let roster = roster(&[(SIGNER, &keygen)]);
        let verification = judged(sealed.record.as_bytes(), &[sealed.act.print()], &roster);
        assert_eq!(verification.findings, []);
        assert!(verification.verified.is_some());
    }
}

fn another_namespace_is_refused_by_both() {
    let keygen = Keygen::new("ed25519");
    let signature = keygen.sign("file", b"lines\n").unwrap();
    let found = signature.verify(b"lines\n", keygen.public_key());
    assert_eq!(found, Err(SignatureFault::Namespace));
    keygen.shell.put("t", "lines\n");
    keygen.shell.put("s", signature.armour());
    keygen
        .shell
        .put("roster", roster(&[(SIGNER, &keygen)]).print());
    assert!(!keygen.shell.succeeds(VERIFY));
    assert!(
        !keygen
            .shell
            .succeeds(&VERIFY.replace("-n ionfolio", "-n file"))
    );
}

/// The second before, the first, the last and the second after; in the roster that the program prints.
fn dates_of_the_roster_mean_the_same_to_both() {
    let key = key("ed25519");
    let mut roster = roster(&[(SIGNER, &key)]);
    let end = time("2026-07-01T02:00:00+02:00");
    roster
        .retire(&signer(SIGNER), key.public_key(), end)
        .unwrap();
    let shell = Shell::new();
    shell.put("roster", roster.print());
    shell.put("t", "lines\n");
    shell.put("s", key.sign("ionfolio", b"lines\n").unwrap().armour());
    let seconds = [
        ("2025-12-31T23:59:59Z", "20251231235959Z", false),
        ("2026-01-01T00:00:00Z", "20260101000000Z", true),
        ("2026-07-01T00:00:00Z", "20260701000000Z", true),
        ("2026-07-01T00:00:01Z", "20260701000001Z", false),
    ];
    for (here, there, valid) in seconds {
        let verify = VERIFY.replace("-Y verify", &format!("-Y verify -O verify-time={there}"));
        assert_eq!(shell.succeeds(&verify), valid, "ssh-keygen at {there}");
        let read = Roster::parse(&roster.print());
        let standing = read.standing(&signer(SIGNER), key.public_key(), time(here));
        assert_eq!(standing == Standing::Valid, valid, "here at {here}");
    }
}

fn keys_made_here_open_in_ssh_keygen() {
    let key = KeyFile::generate(&[9; 32], "worthless").unwrap();
    let lock = Lock {
        passphrase: "nine buffers",
        entropy: [5; 20],
    };
    let shell = Shell::new();
    shell.put_key("plain", key.print(None).unwrap().as_bytes());
    shell.put_key("locked", key.print(Some(&lock)).unwrap().as_bytes());
    let public = format!("{}\n", key.public_key().print());
    assert_eq!(shell.run("ssh-keygen -y -f plain"), public);
    assert_eq!(
        shell.run("ssh-keygen -y -P 'nine buffers' -f locked"),
        public
    );
    assert!(!shell.succeeds("ssh-keygen -y -P 'ten buffers' -f locked"));
    let listed = shell.run("ssh-keygen -l -f plain");
    assert!(listed.contains(&key.public_key().fingerprint()), "{listed}");
}

fn keys_of_ssh_keygen_open_here() {
    let bytes = key_bytes("locked");
    let open = |passphrase| KeyFile::open(&bytes, passphrase);
    assert_eq!(open(None).unwrap_err(), KeyError::Locked);
    assert_eq!(open(Some("six buffers")).unwrap_err(), KeyError::Passphrase);
    let shell = Shell::new();
    shell.put_key("locked", &bytes);
    let public = shell.run("ssh-keygen -y -P 'seven buffers' -f locked");
    let key = open(Some("seven buffers")).unwrap();
    assert!(
        PublicKey::parse(&public)
            .unwrap()
            .is_same_key(key.public_key())
    );
}

/// A page as the first version wrote it. Never make it anew: old records must stay readable.
fn a_stored_page_of_version_1_stays_good() {
    let stored = include_str!("stored/version_1.md");
    let shell = Shell::new();
    shell.put("page.md", stored);
    shell.put("roster", include_str!("stored/roster"));
    let printed = shell.run(RECIPE);
    assert_digests(&shell, &printed);
    let roster = Roster::parse(include_bytes!("stored/roster"));
    let (record, act) = (
        shell.read("r"),
        format!("{}{}", shell.read("t"), shell.read("s")),
    );
    let verification = judged(record.as_bytes(), &[act], &roster);
    assert_eq!(verification.findings, []);
    let statement = Statement::parse(record.as_bytes()).unwrap();
    assert_eq!(statement, laboratory::statement());
    assert_eq!(
        page(&[&sealed(&key("ed25519"))]),
        stored,
        "what is written today"
    );
}
