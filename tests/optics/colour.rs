//! The colour of a wavelength.

use crate::assert_close;
use phasewright::optics::colour::{matching, of_wavelength};

/// CIE 1931 2° standard observer, tabulated values (CIE 15, from memory); the closed approximation is within 0.03 of them.
#[test]
fn the_matching_functions_are_the_tabulated_ones() {
    let table = [
        (450.0, [0.3362, 0.0380, 1.7721]),
        (520.0, [0.0633, 0.7100, 0.0782]),
        (532.0, [0.1891, 0.8850, 0.0369]),
        (555.0, [0.5121, 1.0000, 0.0057]),
        (600.0, [1.0622, 0.6310, 0.0008]),
        (640.0, [0.4479, 0.1750, 0.0000]),
    ];
    for (wavelength, want) in table {
        let got = matching(wavelength);
        for (got, want) in got.into_iter().zip(want) {
            assert_close(got, want, 0.03, &format!("at {wavelength} nm"));
        }
    }
}

#[test]
fn hues_are_those_that_lasers_have() {
    let blue = of_wavelength(450.0);
    assert!(blue.b == 255 && blue.g < 80, "450 nm is blue: {blue:?}");
    let green = of_wavelength(520.0);
    assert!(green.g == 255 && green.r < 80, "520 nm is green: {green:?}");
    let yellow = of_wavelength(577.0);
    assert!(
        yellow.r > 200 && yellow.g > 200 && yellow.b < 80,
        "577 nm is yellow: {yellow:?}"
    );
    let red = of_wavelength(650.0);
    assert!(red.r == 255 && red.g < 80, "650 nm is red: {red:?}");
    assert_eq!(of_wavelength(650.0).hex().len(), 7);
}
