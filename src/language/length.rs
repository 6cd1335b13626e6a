//! How long a show is by its written durations, before anything is planned.

use super::MOST_DAYS;
use crate::exact::Seconds;
use crate::finding::{Code, Finding, Place};
use crate::show::{Cue, Ending, Hold, Length, Show, Transition, WrittenCue};
use num_traits::ToPrimitive;

const PICOSECONDS: u128 = 1_000_000_000_000;
/// The most that a show may last, in picoseconds.
const MOST: u128 = MOST_DAYS as u128 * 86_400 * PICOSECONDS;

/// The finding for a show that lasts longer than a show may: at the duration with which it does.
///
/// Sums are of whole picoseconds, each duration rounded down: exact for every decimal duration down to 10⁻¹² s, and never
/// more than 10⁻⁶ s below in a million cues, so no show that fits is refused. The plan checks what it makes of them.
pub(super) fn too_long(show: &Show) -> Option<Finding> {
    let times: Vec<Times> = show.cues.iter().map(Times::of).collect();
    let run_up = transition(&show.run_up);
    let mut sum = run_up;
    for (number, index) in show.order.iter().enumerate() {
        let Some(times) = times.get(*index as usize) else {
            continue;
        };
        sum += if number == 0 { 0 } else { times.morph };
        sum = if times.until {
            sum.max(run_up + times.hold)
        } else {
            sum + times.hold
        };
        if sum > MOST
            && let Some(WrittenCue::Good(cue)) = show.cues.get(*index as usize)
        {
            return Some(finding(times.longer(cue)));
        }
    }
    let last = match &show.ending {
        Some(Ending::Loop { morph, .. }) => morph,
        Some(Ending::RunDown(run_down)) => run_down,
        None => return None,
    };
    (sum + transition(last) > MOST).then(|| finding(last.place))
}

fn finding(place: Place) -> Finding {
    Finding::new(
        Code::TextTooMuch,
        place,
        format!("with this the show lasts longer than {MOST_DAYS} days"),
    )
    .help("let it be shorter and end in `loop`, which goes on for ever")
}

/// The written durations of a cue, in picoseconds.
struct Times {
    morph: u128,
    hold: u128,
    /// Whether `hold` counts from the end of the run-up.
    until: bool,
}

impl Times {
    fn of(cue: &WrittenCue) -> Self {
        let (morph, hold, until) = match cue {
            WrittenCue::Broken(_) => (0, 0, false),
            WrittenCue::Good(cue) => match &cue.hold {
                Hold::For(time) => (transition(&cue.morph), picoseconds(time), false),
                Hold::Until(time) => (transition(&cue.morph), picoseconds(time), true),
            },
        };
        Self { morph, hold, until }
    }
    /// The place of the longer of the two.
    fn longer(&self, cue: &Cue) -> Place {
        if self.morph > self.hold {
            cue.morph.place
        } else {
            cue.hold_place
        }
    }
}

fn transition(transition: &Transition) -> u128 {
    match &transition.length {
        Length::Given(time) => picoseconds(time),
        Length::Fastest { at_least } => at_least.as_ref().map_or(0, picoseconds),
    }
}

fn picoseconds(time: &Seconds) -> u128 {
    let (upper, lower) = (time.value().numer(), time.value().denom());
    let scaled = upper
        .to_u128()
        .zip(lower.to_u128())
        .and_then(|(upper, lower)| upper.checked_mul(PICOSECONDS)?.checked_div(lower));
    // Written numbers have 15 digits: what does not fit here is a sum of many fractions, and longer than any show.
    scaled.unwrap_or(u128::MAX).min(2 * MOST)
}
