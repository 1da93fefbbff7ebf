//! What a flow is held against: one rule a file, one line each in the registry.
//!
//! A rule hands in facts site by site; `frame` makes findings of them: one a fact, waived
//! where the flow says so, in the order of the text.

mod cautions;
mod finding;
pub mod frame;
mod settings;
mod waivers;

pub use cautions::{Caution, cautions};
pub use corner_fails::{Broken, Corner, corner_fails};
pub use finding::Finding;
pub use frame::{Context, Needs, Rule, Threshold};
pub use settings::lay_over;
pub use waivers::finish;

macro_rules! registry {
    ($($rule:ident)+) => {
        $(mod $rule;)+

        /// All rules: by order of steps, by materials and processes, by section.
        pub static REGISTRY: &[&Rule] = &[$(&$rule::RULE),+];
    };
}

registry! {
    open_gap_polished
    open_gap_wetted
    open_gap_left
    release_before_roof
    sacrificial_left
    release_blocked
    permeable_roof_unsealed
    polish_without_overburden
    barrier_after_metal
    metal_left_uncapped
    resist_cooked
    block_mask_late
    block_mask_buried
    cure_after_hermetic
    via_before_seal
    via_unlined
    after_broken
    step_without_effect
    number_out_of_order
    stale_waiver
    too_hot_for
    sacrificial_cooked
    release_outside_window
    cap_too_tight
    selectivity_too_low
    hf_on_oxide
    fluorine_on_metal
    bare_metal_in_oxidizer
    ruthenium_in_oxygen
    copper_without_barrier
    plasma_on_low_k
    etch_rate_unknown
    surface_sensitive_film
    seal_that_fills
    film_cracks
    poor_adhesion
    soft_film_polished
    space_not_sealed
    polish_opens_void
    roof_too_thin
    via_meets_void
    seam_near_etch
    barrier_too_thin
    gap_not_worth_it
    trapped_sacrificial
    line_undercut
    pattern_collapse
    void_near_next_level
    topography
    outside_ballistic
    corner_fails
    data_missing
}

/// The rule of a name.
pub fn rule(name: &str) -> Option<&'static Rule> {
    REGISTRY.iter().find(|rule| rule.name == name).copied()
}

/// Holds one judged variant against all rules: findings in the order of the text.
///
/// What concerns the whole run (stale waivers, numbers that are missing in several variants)
/// is for [`finish`].
pub fn check(context: &Context<'_>) -> Vec<Finding> {
    frame::settle::run(REGISTRY, context)
}
