//! The colour on a screen of light of one wavelength.
//!
//! The CIE 1931 2° colour matching functions in the closed approximation of Wyman, Sloan and Shirley, "Simple Analytic
//! Approximations to the CIE XYZ Color Matching Functions", *Journal of Computer Graphics Techniques* 2(2), 2013
//! (multi-lobe fit, constants from memory), then XYZ to linear sRGB (IEC 61966-2-1).
//!
//! No spectral colour lies inside what a screen can show: what is negative is cut, the strongest channel is made full, and
//! a twentieth of white is added, without which deep blue and deep red could not be seen on black. (Adding white until
//! nothing is negative would turn a green laser teal.) Brightness is the picture's to give.

/// A colour in sRGB, each channel 0 to 255.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Rgb {
    /// Red.
    pub r: u8,
    /// Green.
    pub g: u8,
    /// Blue.
    pub b: u8,
}

impl Rgb {
    /// `#rrggbb`.
    #[must_use]
    pub fn hex(self) -> String {
        format!("#{:02x}{:02x}{:02x}", self.r, self.g, self.b)
    }
}

/// What is drawn where the rig does not tell a wavelength: nearly white.
pub const UNKNOWN: Rgb = Rgb {
    r: 0xf2,
    g: 0xf4,
    b: 0xff,
};

/// White that is added to a full colour, of its strongest channel, in linear light.
const WHITE: f64 = 0.05;

/// CIE 1931 x̄, ȳ, z̄ at a wavelength in nanometres.
#[must_use]
pub fn matching(wavelength: f64) -> [f64; 3] {
    // One lobe: height, centre, and its two widths, given as 1/σ below and above the centre.
    let lobe = |height: f64, centre: f64, below: f64, above: f64| {
        let inverse = if wavelength < centre { below } else { above };
        let t = (wavelength - centre) * inverse;
        height * libm::exp(-0.5 * t * t)
    };
    [
        lobe(0.362, 442.0, 0.0624, 0.0374)
            + lobe(1.056, 599.8, 0.0264, 0.0323)
            + lobe(-0.065, 501.1, 0.0490, 0.0382),
        lobe(0.821, 568.8, 0.0213, 0.0247) + lobe(0.286, 530.9, 0.0613, 0.0322),
        lobe(1.217, 437.0, 0.0845, 0.0278) + lobe(0.681, 459.0, 0.0385, 0.0725),
    ]
}

/// The screen colour of a wavelength in nanometres; outside 390 to 730 nm that of the nearer end.
#[must_use]
pub fn of_wavelength(wavelength: f64) -> Rgb {
    let [x, y, z] = matching(wavelength.clamp(390.0, 730.0));
    let linear = [
        3.240_625_5 * x - 1.537_208 * y - 0.498_628_6 * z,
        -0.968_930_7 * x + 1.875_756_1 * y + 0.041_517_5 * z,
        0.055_710_1 * x - 0.204_021_1 * y + 1.056_995_9 * z,
    ];
    let most = linear.into_iter().fold(0.0, f64::max).max(1e-9);
    let channel = |value: f64| gamma((value.max(0.0) / most + WHITE) / (1.0 + WHITE));
    let [r, g, b] = linear.map(channel);
    Rgb { r, g, b }
}

/// The sRGB transfer curve, to 8 bits.
fn gamma(linear: f64) -> u8 {
    let encoded = if linear <= 0.003_130_8 {
        12.92 * linear
    } else {
        1.055 * libm::pow(linear, 1.0 / 2.4) - 0.055
    };
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "between 0 and 255 after the clamp"
    )]
    let byte = libm::round(encoded.clamp(0.0, 1.0) * 255.0) as u8;
    byte
}
