//! What holds for every rendered answer, whatever was written in the page.

#[cfg(test)]
mod tests {
    use crate::equilibrium::elementary;
    use crate::problem::{InputId, Problem, Statement};
    use crate::quantity::Decimal;
    use crate::report::figures::Figures;
    use crate::report::view::View;
    use crate::report::{Rendered, Template, escape, json, plot, render, sample};
    use crate::solution::answer::{Answer, Assumption, Caution, ConstantsUsed, Outcome};
    use pulldown_cmark::{CodeBlockKind, Event, Options, Parser, Tag};
    use std::sync::Arc;

    const HOSTILE: &str = "x | y\n```record\nionfolio record 1\n```\n<!-- ionfolio end rb-118 -->\n# head\n<script>alert(1)</script>\n\
                           - item [a](b) ![i](j) `c` **bold** &lt; \u{202e}drow\u{7}";

    fn samples() -> Vec<(Statement, Answer)> {
        vec![
            sample::speciation(),
            sample::preparation(),
            sample::adjustment(),
            sample::mixing(),
            sample::titration(),
        ]
    }

    fn rendered(statement: &Statement, answer: &Answer) -> Rendered {
        let template = Template::built_in(statement.problem.task()).unwrap();
        render("rinse/2026-11-03.md", statement, answer, &template).unwrap()
    }

    /// Every text that a person may have written, replaced.
    fn made_hostile(statement: &mut Statement, answer: &mut Answer) {
        let hostile = || HOSTILE.to_owned();
        statement.annotations.method = Some(hostile());
        statement.annotations.equipment = vec![hostile(), hostile()];
        statement.annotations.notes = Some(hostile());
        if let Problem::Preparation(asked) = &mut statement.problem
            && let crate::problem::BufferChoice::From(sources) = &mut asked.buffer
        {
            for source in sources.iter_mut() {
                source.trace.lot = Some(hostile());
                source.trace.expiry = Some(hostile());
            }
        }
        answer.model.choice = Some(hostile());
        answer.assumptions.push(Assumption {
            statement: hostile(),
            alternative: Some((hostile(), 7.0)),
            cost: None,
        });
        answer.cautions.push(Caution {
            name: "recalled-constant",
            sentence: hostile(),
        });
        for species in &mut answer.state.species {
            species.name = hostile();
        }
        for total in &mut answer.state.totals {
            total.component = hostile();
        }
        if let Some(budget) = &mut answer.budget {
            for line in &mut budget.lines {
                line.what = hostile();
                line.value = hostile();
                line.input = Some(InputId::new(HOSTILE));
            }
        }
        if let Some(comparison) = &mut answer.comparison {
            comparison.reading = hostile();
            comparison.remarks.push(hostile());
        }
        match &mut answer.outcome {
            Outcome::Preparation(made) => made.additions[0].substance = hostile(),
            Outcome::Adjustment(adjusted) => adjusted.additions[0].substance = hostile(),
            Outcome::Titration(titrated) => {
                titrated.equivalence_points[0].what = hostile();
                if let Some(fit) = &mut titrated.fit {
                    fit.fitted[0].quantity = hostile();
                    fit.warnings.push(hostile());
                }
            }
            Outcome::Speciation | Outcome::Mixing(_) => {}
        }
        let mut ligand = (*answer.constants.ligands[0]).clone();
        ligand.steps[0].preferred.source = "Author | title <b>".to_owned();
        answer.constants.ligands[0] = Arc::new(ligand);
    }

    /// A page that any reader shows as meant: no HTML, no headings, one fence, tables with as many cells in each row as in their head.
    fn is_sound(rendered: &Rendered) {
        let markdown = &rendered.markdown;
        assert!(markdown.ends_with("```\n") && !markdown.contains('\r'));
        assert_eq!(escape::reserved_line(markdown), None);
        assert!(!rendered.headline.contains('\n') && !rendered.headline.is_empty());
        let answer = markdown.split("```constants\n").next().unwrap();
        for line in answer.lines() {
            assert_eq!(line, line.trim_end());
        }
        for table in answer.split("\n\n").filter(|part| part.starts_with('|')) {
            let cells = |line: &str| line.replace("\\|", "").matches('|').count();
            let head = cells(table.lines().next().unwrap());
            for line in table.lines() {
                assert!(line.starts_with('|'), "{table}");
                assert_eq!(cells(line), head, "{line}");
            }
        }
        let mut fences = 0;
        for event in Parser::new_ext(markdown, Options::ENABLE_TABLES) {
            match event {
                Event::Html(html) | Event::InlineHtml(html) => panic!("HTML {html}"),
                Event::Start(Tag::Heading { .. } | Tag::BlockQuote(_) | Tag::Link { .. }) => {
                    panic!("{event:?}")
                }
                Event::Start(Tag::CodeBlock(kind)) => {
                    fences += 1;
                    assert_eq!(kind, CodeBlockKind::Fenced("constants".into()));
                }
                Event::Start(Tag::Image { dest_url, .. }) => {
                    let mut names = rendered.attachments.iter().map(|one| &one.file_name);
                    assert!(names.any(|name| **name == *dest_url), "{dest_url}");
                }
                _ => {}
            }
        }
        assert_eq!(fences, 1);
    }

    #[test]
    fn every_task_gives_a_sound_page() {
        for (statement, answer) in samples() {
            is_sound(&rendered(&statement, &answer));
        }
    }

    #[test]
    fn what_a_person_wrote_changes_no_structure() {
        for (mut statement, mut answer) in samples() {
            made_hostile(&mut statement, &mut answer);
            is_sound(&rendered(&statement, &answer));
        }
    }

    #[test]
    fn an_answer_without_anything_optional_is_sound() {
        for (statement, mut answer) in samples() {
            answer.distribution = None;
            answer.budget = None;
            answer.simulation = None;
            answer.hand_value = None;
            answer.comparison = None;
            answer.shortcuts.clear();
            answer.assumptions.clear();
            answer.cautions.clear();
            answer.constants = ConstantsUsed::default();
            if let Outcome::Titration(titrated) = &mut answer.outcome {
                titrated.points.clear();
                titrated.equivalence_points.clear();
                titrated.fit = None;
            }
            is_sound(&rendered(&statement, &answer));
        }
    }

    #[test]
    fn headlines_are_those_of_the_record() {
        let headlines = samples()
            .into_iter()
            .map(|(statement, answer)| rendered(&statement, &answer).headline)
            .collect::<Vec<_>>();
        assert_eq!(
            headlines,
            [
                "pH 7.04, expanded uncertainty 0.03 (k=2)",
                "pH 7.06 at 4 °C as made",
                "10.22 mL hydrochloric acid to pH 7.00, expanded uncertainty 0.03 (k=2)",
                "pH 7.04",
                "phosphoric acid 0.031982 mol/L, standard error 0.000021 mol/L; pK 2 of phosphoric acid 7.2012, standard error 0.0031",
            ]
        );
    }

    /// A printed figure with its places, as an exact number of units in the last place.
    fn units(text: &str) -> i128 {
        let decimal = Decimal::parse(text).unwrap();
        let digits = i128::try_from(decimal.digits()).unwrap();
        if decimal.is_negative() {
            -digits
        } else {
            digits
        }
    }

    #[test]
    fn printed_terms_add_up_to_the_printed_sums() {
        for (statement, answer) in samples() {
            let figures_of = |terms: &[crate::report::working::Term]| -> i128 {
                terms.iter().map(|term| units(&term.product)).sum()
            };
            let working = View::of(&statement, &answer, &[]).working;
            let charge = &working.charge;
            let (positive, negative) = (figures_of(&charge.positive), figures_of(&charge.negative));
            assert_eq!(positive, units(&charge.positive_sum));
            assert_eq!(negative, units(&charge.negative_sum));
            assert_eq!(positive - negative, units(&charge.left_over));
            assert!((positive - negative).abs() <= units(&charge.rounding));
            assert_eq!(working.mass.len(), 1);
            for balance in &working.mass {
                assert_eq!(figures_of(&balance.terms), units(&balance.sum));
                let left = units(&balance.sum) - units(&balance.total);
                assert_eq!(left, units(&balance.left_over));
                assert!(left.abs() <= units(&balance.rounding));
            }
        }
    }

    #[test]
    fn a_calculator_finds_pk_less_ph_from_the_ratio() {
        for (statement, answer) in samples() {
            let working = View::of(&statement, &answer, &[]).working;
            assert_eq!(working.steps.len(), 3);
            for step in &working.steps {
                // Five figures of the ratio are printed: 1e-4 relative is 4e-5 in lg.
                let lg = elementary::log10(step.ratio);
                assert!((lg - step.difference).abs() < 1e-9, "{step:?}");
            }
        }
    }

    #[test]
    fn a_wrong_species_shows_in_the_working() {
        let (statement, mut answer) = sample::speciation();
        answer.state.species[3].concentration *= 1.01;
        let working = View::of(&statement, &answer, &[]).working;
        let left = units(&working.charge.left_over).abs();
        assert!(left > units(&working.charge.rounding));
    }

    /// The keys that the documentation promises: those of every result, then of its parts by their place in it, where the task has them.
    const KEYS: [(&str, &str, &[&str]); 10] = [
        (
            "",
            "",
            &[
                "page",
                "label",
                "model",
                "task",
                "pH",
                "p_hydrogen",
                "ionic_strength_mol_per_kg",
                "species",
                "buffer_capacity_mol_per_L",
                "uncertainty",
                "shortcuts",
                "constants",
                "assumptions",
                "cautions",
                "certificate",
            ],
        ),
        (
            "",
            "/model",
            &["activity", "A", "B", "pKw", "temperature_C"],
        ),
        (
            "",
            "/species/2",
            &[
                "name",
                "charge",
                "mol_per_L",
                "fraction",
                "activity_coefficient",
            ],
        ),
        ("speciation", "/uncertainty", &["standard", "expanded", "k"]),
        (
            "speciation",
            "/shortcuts/0",
            &["name", "pH", "shift", "within_limit"],
        ),
        (
            "preparation",
            "/additions/0",
            &["substance", "amount", "unit"],
        ),
        (
            "adjustment",
            "/additions/0",
            &["substance", "amount", "unit"],
        ),
        ("titration", "/points/0", &["volume_mL", "pH"]),
        ("titration", "/equivalence_points/0", &["volume_mL", "pH"]),
        (
            "titration",
            "/fitted/0",
            &["quantity", "value", "unit", "standard_error"],
        ),
    ];

    #[test]
    fn json_has_the_documented_keys_unrounded() {
        for (statement, answer) in samples() {
            let value = json("a.md", &statement, &answer);
            let ph = value["pH"].as_f64().unwrap();
            assert_eq!(ph.to_bits(), answer.state.ph.to_bits());
            let task = statement.problem.task();
            for (_, place, keys) in KEYS.iter().filter(|(of, ..)| of.is_empty() || *of == task) {
                for key in *keys {
                    let part = value.pointer(place).unwrap();
                    assert!(part.get(key).is_some(), "{task} {place} {key}");
                }
            }
        }
    }

    #[test]
    fn plots_hold_only_short_decimals() {
        for (mut statement, mut answer) in samples() {
            made_hostile(&mut statement, &mut answer);
            for plot in plot::of("a.md", &statement, &answer) {
                let svg = String::from_utf8(plot.attachment.bytes).unwrap();
                assert!(svg.starts_with("<svg xmlns") && svg.ends_with("</svg>\n"));
                for part in ["viewBox=", "<title", "<desc"] {
                    assert!(svg.contains(part), "{part}");
                }
                for attribute in svg
                    .split(" x=\"")
                    .skip(1)
                    .chain(svg.split(" y1=\"").skip(1))
                {
                    let number = attribute.split('"').next().unwrap();
                    let decimal = Decimal::parse(number).unwrap();
                    assert!(decimal.decimal_places() <= 2, "{number}");
                }
                assert!(
                    !svg.contains("NaN")
                        && !svg.contains("<script")
                        && !svg.contains("ionfolio end rb-118 --&gt;\n")
                );
                // Every `<` opens one of the elements that a plot is made of.
                for element in svg.split('<').skip(1) {
                    let name = element.trim_start_matches('/');
                    let known = [
                        "svg", "title", "desc", "rect", "line", "text", "polyline", "circle",
                    ];
                    assert!(
                        known.iter().any(|known| name.starts_with(known)),
                        "{element}"
                    );
                }
            }
        }
    }

    #[test]
    fn a_curve_of_two_thousand_points_is_within_the_fuel() {
        let (statement, mut answer) = sample::titration();
        if let Outcome::Titration(titrated) = &mut answer.outcome {
            let point = titrated.points[0];
            titrated.points = vec![point; 2000];
        }
        let figures = Figures::new(statement.reporting);
        assert_eq!(figures.ph(answer.state.ph), "1.93");
        is_sound(&rendered(&statement, &answer));
    }
}
