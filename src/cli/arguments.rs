//! The command line, in types.

use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

const AFTER: &str = "\
Where to begin:
  ionfolio entry page.md --from solution-preparation   a page from a template
  ionfolio check page.md                               what is wrong with it
  ionfolio compute page.md                             draft results into it
  ionfolio seal page.md --new-signer \"Your Name\"       signed results

Exit status: 0 all well; 1 a finding; 2 the command line or a block is wrong; 3 a file or key could not be read or written.
Results go to standard output, everything else to standard error.

The program evidences alteration; it does not prevent it, and it does not make a laboratory compliant.";

/// Computes, documents, signs and verifies solution equilibria in a laboratory's notebook pages.
#[derive(Debug, Parser)]
#[command(name = "ionfolio", version, about, after_help = AFTER, arg_required_else_help = true, max_term_width = 100)]
pub(super) struct Arguments {
    #[command(subcommand)]
    pub(super) command: Command,
}

#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Work out the blocks of pages and write draft results after them
    #[command(after_help = "\
Sealed results are left alone. A second run of an unchanged page changes nothing. `-` reads a page from standard input and prints it
with its results to standard output.

  ionfolio compute rinse/*.md
  ionfolio compute --dry-run --format json rinse/2026-11-03.md
  cat page.md | ionfolio compute - > with-results.md")]
    Compute(ComputeArguments),
    /// Read the blocks of pages and report every error; writes nothing
    Check(CheckArguments),
    /// Turn drafts into signed records
    #[command(after_help = "\
The page is computed first. Without a key, `--new-signer \"Your Name\"` makes one and says where. The register of the signer is
written before the page; a run that was stopped between the two is completed by the next.

  ionfolio seal rinse/2026-11-03.md --new-signer \"Bench Analyst\"
  ionfolio seal rinse/2026-11-03.md --label rb-118
  ionfolio seal rinse/2026-11-03.md --signer bench.analyst --key ~/.ssh/id_ed25519.pub

A key is looked for in the folder that `ionfolio signer new` names; then, for a signer on the roster, in an SSH agent and in ~/.ssh.")]
    Seal(SealArguments),
    /// Add a second person's signature to sealed results
    #[command(after_help = "\
What is recorded and what computing it again gives are shown side by side first; what does not verify is not signed.

  ionfolio countersign rinse/2026-11-03.md --as reviewed --signer second.analyst
  ionfolio countersign rinse/2026-11-03.md --as rejected --label rb-118 --note \"wrong lot\"")]
    Countersign(CountersignArguments),
    /// Keep a sealed result and open a draft that supersedes it
    #[command(after_help = "\
  ionfolio amend rinse/2026-11-03.md --label rb-118 --reason \"lot was K-2292\"
  (correct the block in an editor)
  ionfolio seal rinse/2026-11-03.md")]
    Amend(AmendArguments),
    /// Check records: bytes, signatures, registers, and by computing again
    #[command(after_help = "\
A page is checked with its signers' registers. The folder of a notebook is checked as a whole: also for acts that are gone, copies, and
sources that were amended later.

  ionfolio verify rinse/2026-11-03.md
  ionfolio verify . --keeper SHA256:...")]
    Verify(VerifyArguments),
    /// Report on a whole notebook for an inspector
    #[command(after_help = "\
Who did what when, with which constants, what was amended and why, what does not verify, what was never reviewed.

  ionfolio audit . > audit.md
  ionfolio audit . --format html > audit.html
  ionfolio audit rinse --format csv
  ionfolio audit . --signer bench.analyst --since 2026-11-01 --until 2026-11-30

What a filter leaves out is examined all the same, and counted in the report and in the exit status.")]
    Audit(AuditArguments),
    /// List or show the constants library
    Constants(ConstantsArguments),
    /// A new page from a template
    #[command(after_help = "Without `--from` the templates are listed.")]
    Entry(EntryArguments),
    /// Keys and the roster
    Signer(SignerArguments),
    /// One error, finding or caution, with its remedy
    Explain(ExplainArguments),
}

/// How results are printed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Format {
    /// For people
    Text,
    /// One line for each
    Short,
    /// One JSON array
    Json,
}

#[derive(Debug, Args)]
pub(super) struct ComputeArguments {
    /// Pages, or `-` for standard input
    #[arg(required = true)]
    pub(super) pages: Vec<PathBuf>,
    /// Write nothing
    #[arg(long)]
    pub(super) dry_run: bool,
    /// How results and errors are printed
    #[arg(long, value_enum, default_value = "text")]
    pub(super) format: Format,
}

#[derive(Debug, Args)]
pub(super) struct CheckArguments {
    /// Pages
    #[arg(required = true)]
    pub(super) pages: Vec<PathBuf>,
    /// How errors are printed
    #[arg(long, value_enum, default_value = "text")]
    pub(super) format: Format,
}

#[derive(Debug, Args)]
pub(super) struct SealArguments {
    /// Pages
    #[arg(required = true)]
    pub(super) pages: Vec<PathBuf>,
    /// Only the block of this label
    #[arg(long)]
    pub(super) label: Option<String>,
    /// Sign with the key of this signer
    #[arg(long, value_name = "NAME", group = "whose")]
    pub(super) signer: Option<String>,
    /// Sign with this key: a private key's file, or a `.pub` file whose private half an SSH agent holds
    #[arg(long, value_name = "FILE", requires = "whose")]
    pub(super) key: Option<PathBuf>,
    /// Sign as this person, and make a key if there is none
    #[arg(long, value_name = "NAME", conflicts_with = "signer")]
    pub(super) new_signer: Option<String>,
}

/// What a second person says of a result.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum As {
    /// It was gone through and found right
    Reviewed,
    /// It may be used
    Approved,
    /// It was found wrong
    Rejected,
    /// It is no longer valid
    Withdrawn,
}

#[derive(Debug, Args)]
pub(super) struct CountersignArguments {
    /// Pages
    #[arg(required = true)]
    pub(super) pages: Vec<PathBuf>,
    /// What is signed
    #[arg(long = "as", value_enum)]
    pub(super) meaning: As,
    /// Only the block of this label
    #[arg(long)]
    pub(super) label: Option<String>,
    /// A remark that is signed with it
    #[arg(long)]
    pub(super) note: Option<String>,
    /// Sign with the key of this signer
    #[arg(long, value_name = "NAME", group = "whose")]
    pub(super) signer: Option<String>,
    /// Sign with this key: a private key's file, or a `.pub` file whose private half an SSH agent holds
    #[arg(long, value_name = "FILE", requires = "whose")]
    pub(super) key: Option<PathBuf>,
    /// Do not ask before signing
    #[arg(long)]
    pub(super) yes: bool,
}

#[derive(Debug, Args)]
pub(super) struct AmendArguments {
    /// The page
    pub(super) page: PathBuf,
    /// The block
    #[arg(long)]
    pub(super) label: String,
    /// Why; it goes into the page and into the new record
    #[arg(long)]
    pub(super) reason: String,
}

#[derive(Debug, Args)]
pub(super) struct VerifyArguments {
    /// Pages, or folders with all pages below them
    #[arg(required = true)]
    pub(super) paths: Vec<PathBuf>,
    /// How findings are printed
    #[arg(long, value_enum, default_value = "text")]
    pub(super) format: Format,
    /// Fingerprint of the key of the roster's keeper, learnt from outside the notebook
    #[arg(long, value_name = "SHA256:...")]
    pub(super) keeper: Option<String>,
}

/// How an audit is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum ReportFormat {
    /// Headings and tables
    Markdown,
    /// One page for screen and paper
    Html,
    /// One row for each result, act and finding
    Csv,
    /// One JSON array, an object for each notebook
    Json,
}

#[derive(Debug, Args)]
pub(super) struct AuditArguments {
    /// Notebooks, or folders and pages in them
    #[arg(required = true)]
    pub(super) paths: Vec<PathBuf>,
    /// How the report is written
    #[arg(long, value_enum, default_value = "markdown")]
    pub(super) format: ReportFormat,
    /// Only results with an act of this signer
    #[arg(long)]
    pub(super) signer: Option<String>,
    /// Only results that name this substance
    #[arg(long)]
    pub(super) substance: Option<String>,
    /// Only results of this label
    #[arg(long)]
    pub(super) label: Option<String>,
    /// Only results with an act on this day or later
    #[arg(long, value_name = "YYYY-MM-DD")]
    pub(super) since: Option<String>,
    /// Only results with an act on this day or earlier
    #[arg(long, value_name = "YYYY-MM-DD")]
    pub(super) until: Option<String>,
    /// Fingerprint of the key of the roster's keeper, learnt from outside the notebook
    #[arg(long, value_name = "SHA256:...")]
    pub(super) keeper: Option<String>,
}

#[derive(Debug, Args)]
pub(super) struct ConstantsArguments {
    #[command(subcommand)]
    pub(super) command: ConstantsCommand,
}

#[derive(Debug, Subcommand)]
pub(super) enum ConstantsCommand {
    /// The substances of the library, or those whose name or formula contains a text
    List {
        /// Part of a name or formula
        #[arg(default_value = "")]
        containing: String,
    },
    /// Everything that is known of a substance, disagreements included
    Show {
        /// Name, synonym, formula or CAS number
        substance: String,
    },
}

#[derive(Debug, Args)]
pub(super) struct EntryArguments {
    /// The new page
    pub(super) page: Option<PathBuf>,
    /// The template
    #[arg(long, value_name = "TEMPLATE")]
    pub(super) from: Option<String>,
}

/// What enrolling makes of earlier acts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Earlier {
    /// They count: the key signs from its first act on
    Count,
    /// They do not: the key signs from now on
    Refuse,
}

#[derive(Debug, Args)]
pub(super) struct SignerArguments {
    #[command(subcommand)]
    pub(super) command: SignerCommand,
}

#[derive(Debug, Subcommand)]
pub(super) enum SignerCommand {
    /// Make a key
    New {
        /// Printed name; the signer's name is made from it
        name: String,
        /// Ask for a passphrase and lock the key with it
        #[arg(long)]
        passphrase: bool,
    },
    /// The signers of a notebook's roster
    List {
        /// A page or folder of the notebook
        #[arg(default_value = ".")]
        notebook: PathBuf,
    },
    /// Put a public key on a notebook's roster
    Enrol {
        /// The signer's name
        signer: String,
        /// The public key's file
        key: PathBuf,
        /// Whether acts count that were signed with this key before
        #[arg(long, value_enum)]
        earlier_acts: Option<Earlier>,
        /// A page or folder of the notebook
        #[arg(long, default_value = ".")]
        notebook: PathBuf,
    },
    /// Sign roster and people as they are, as their keeper; verifiers then give the fingerprint with `--keeper`
    SignRoster {
        /// The keeper's signer name
        #[arg(long, value_name = "NAME", group = "whose")]
        signer: Option<String>,
        /// Sign with this key: a private key's file, or a `.pub` file whose private half an SSH agent holds
        #[arg(long, value_name = "FILE", requires = "whose")]
        key: Option<PathBuf>,
        /// A page or folder of the notebook
        #[arg(long, default_value = ".")]
        notebook: PathBuf,
    },
    /// Retire a signer's keys from now on; what they signed before stays good
    Retire {
        /// The signer's name
        signer: String,
        /// A page or folder of the notebook
        #[arg(long, default_value = ".")]
        notebook: PathBuf,
    },
}

#[derive(Debug, Args)]
pub(super) struct ExplainArguments {
    /// The name, as printed in brackets
    pub(super) name: String,
}
