//! Random numbers by counting: number `i` is the same wherever it is drawn.

/// A stream of numbers.
#[derive(Clone, Debug)]
pub struct Random {
    key: u64,
    count: u64,
}

impl Random {
    /// Stream `key`.
    pub fn new(key: u64) -> Self {
        Random { key, count: 0 }
    }

    /// The next 64 bits. Source of the mixing: Steele, Lea & Flood (2014), OOPSLA, "SplitMix".
    pub fn bits(&mut self) -> u64 {
        self.count += 1;
        let mut z =
            self.key.wrapping_mul(0xD1B5_4A32_D192_ED03) ^ self.count.wrapping_mul(0x9E37_79B9_7F4A_7C15);
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    /// A number in [low, high), with four digits so that a study can print it.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        let unit = (self.bits() >> 11) as f64 / (1_u64 << 53) as f64;
        let value = low + unit * (high - low);
        format!("{value:.4}").parse().unwrap_or(value)
    }

    /// One of `0..count`.
    pub fn below(&mut self, count: usize) -> usize {
        (self.bits() % count as u64) as usize
    }
}
