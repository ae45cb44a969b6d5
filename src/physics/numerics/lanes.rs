//! Logarithm and normal distribution without branches, so that loops over many values turn into vector instructions.
//!
//! Ordinary arithmetic only, no fused multiply-add: results are the same on every machine and whether values come one by one or in lanes.
//! Algorithms and coefficients after FreeBSD's msun (`e_log.c`, `e_exp.c`, `s_erf.c`; © 1993 Sun Microsystems, Inc.: permission to use, copy, modify,
//! and distribute is freely granted, provided that this notice is preserved), which are also those of the `libm` crate; the branches are made selections here.

use core::f64::consts::FRAC_1_SQRT_2;

const LN2_HIGH: f64 = 6.931_471_803_691_238_16e-1;
const LN2_LOW: f64 = 1.908_214_929_270_587_70e-10;
const MANTISSA: u64 = (1 << 52) - 1;
const ONE: u64 = 1023 << 52;

/// Polynomial in `x`, constant first.
#[inline(always)]
fn polynomial<const N: usize>(x: f64, coefficients: [f64; N]) -> f64 {
    let mut sum = 0.0;
    let mut i = N;
    while i > 0 {
        i -= 1;
        sum = sum * x + coefficients[i];
    }
    sum
}

/// ln x of a positive normal number, to the last digit but one; of any other number nothing is promised.
#[inline(always)]
#[must_use]
pub fn ln(x: f64) -> f64 {
    // x = 2^k m with m from √½ to √2; ln m = 2 artanh s with s = f/(2 + f), f = m − 1.
    const ROOT_HALF: u64 = 0x3fe6_a09e_0000_0000;
    // 2^52, in whose last digits a small whole number can be written, and the bias of the exponent.
    const WHOLE: u64 = 0x4330_0000_0000_0000;
    let shifted = x.to_bits().wrapping_add(ONE - ROOT_HALF);
    let k = f64::from_bits(WHOLE | (shifted >> 52)) - (4_503_599_627_370_496.0 + 1023.0);
    let f = f64::from_bits((shifted & MANTISSA).wrapping_add(ROOT_HALF)) - 1.0;
    let half_square = 0.5 * f * f;
    let s = f / (2.0 + f);
    let z = s * s;
    let w = z * z;
    let even = w * polynomial(
        w,
        [3.999_999_999_940_941_908e-1, 2.222_219_843_214_978_396e-1, 1.531_383_769_920_937_332e-1],
    );
    let odd = z * polynomial(
        w,
        [
            6.666_666_666_666_735_130e-1,
            2.857_142_874_366_239_149e-1,
            1.818_357_216_161_805_012e-1,
            1.479_819_860_511_658_591e-1,
        ],
    );
    s * (half_square + (odd + even)) + k * LN2_LOW - half_square + f + k * LN2_HIGH
}

/// e^x for −708 ≤ x ≤ 700; of any other number nothing is promised.
#[inline(always)]
#[must_use]
pub fn exp(x: f64) -> f64 {
    // 1.5 · 2^52: adding it rounds to a whole number, which then stands in the last digits.
    const ROUND: f64 = 6_755_399_441_055_744.0;
    let rounded = x * core::f64::consts::LOG2_E + ROUND;
    let k = rounded - ROUND;
    let scale = f64::from_bits(rounded.to_bits().wrapping_sub(ROUND.to_bits()).wrapping_add(1023) << 52);
    let (high, low) = (x - k * LN2_HIGH, k * LN2_LOW);
    let r = high - low;
    let square = r * r;
    let c = r - square
        * polynomial(
            square,
            [
                1.666_666_666_666_660_190_37e-1,
                -2.777_777_777_701_559_338_42e-3,
                6.613_756_321_437_934_361_17e-5,
                -1.653_390_220_546_525_153_90e-6,
                4.138_136_797_057_238_460_39e-8,
            ],
        );
    scale * (1.0 + (r * c / (2.0 - c) - low + high))
}

/// sin x for 0 ≤ x ≤ π/2, to a few units of the last digit: Taylor's series up to x²³, whose next term is below 1e-19.
#[inline(always)]
#[must_use]
pub fn quarter_sine(x: f64) -> f64 {
    const fn term(n: u32) -> f64 {
        let mut product = if n % 2 == 1 { -1.0 } else { 1.0 };
        let mut i = 2;
        while i <= 2 * n + 1 {
            product *= i as f64;
            i += 1;
        }
        1.0 / product
    }
    let square = x * x;
    let beyond = polynomial(
        square,
        [
            const { term(1) },
            const { term(2) },
            const { term(3) },
            const { term(4) },
            const { term(5) },
            const { term(6) },
            const { term(7) },
            const { term(8) },
            const { term(9) },
            const { term(10) },
            const { term(11) },
        ],
    );
    x + x * square * beyond
}

/// Beyond this argument erfc is below 1e-305 and taken for 0.
const VANISHED: f64 = 26.4;

/// erfc(x), to a few units of the last digit.
#[inline(always)]
fn erfc(x: f64) -> f64 {
    const ERX: f64 = 8.450_629_115_104_675_292_97e-1;
    let a = x.abs();
    let a = if a > VANISHED { VANISHED } else { a };
    // Near: erf x = x + x P/Q(x²). Middle: erfc = 1 − ERX − P/Q(a − 1). Far: e^(−a² − 9/16 + R/S(1/a²))/a.
    let (near, middle, steep) = (a < 0.84375, a < 1.25, a < 1.0 / 0.35);
    let square = a * a;
    let near_top = polynomial(
        square,
        [
            1.283_791_670_955_125_585_61e-1,
            -3.250_421_072_470_014_993_70e-1,
            -2.848_174_957_559_851_047_66e-2,
            -5.770_270_296_489_441_591_57e-3,
            -2.376_301_665_665_016_260_84e-5,
        ],
    );
    let near_bottom = polynomial(
        square,
        [
            1.0,
            3.979_172_239_591_553_528_19e-1,
            6.502_224_998_876_729_444_85e-2,
            5.081_306_281_875_765_627_76e-3,
            1.324_947_380_043_216_445_26e-4,
            -3.960_228_278_775_368_123_20e-6,
        ],
    );
    let s = a - 1.0;
    let middle_top = polynomial(
        s,
        [
            -2.362_118_560_752_659_440_77e-3,
            4.148_561_186_837_483_316_66e-1,
            -3.722_078_760_357_013_238_47e-1,
            3.183_466_199_011_617_536_74e-1,
            -1.108_946_942_823_966_774_76e-1,
            3.547_830_432_561_823_593_71e-2,
            -2.166_375_594_868_790_843_00e-3,
        ],
    );
    let middle_bottom = polynomial(
        s,
        [
            1.0,
            1.064_208_804_008_442_282_86e-1,
            5.403_979_177_021_710_489_37e-1,
            7.182_865_441_419_626_628_68e-2,
            1.261_712_198_087_616_421_12e-1,
            1.363_708_391_202_905_073_62e-2,
            1.198_449_984_679_910_741_70e-2,
        ],
    );
    let u = 1.0 / square;
    let steep_top = polynomial(
        u,
        [
            -9.864_944_034_847_148_227_05e-3,
            -6.938_585_727_071_817_643_72e-1,
            -1.055_862_622_532_329_098_14e1,
            -6.237_533_245_032_600_603_96e1,
            -1.623_966_694_625_734_703_55e2,
            -1.846_050_929_067_110_359_94e2,
            -8.128_743_550_630_659_342_46e1,
            -9.814_329_344_169_145_485_92e0,
        ],
    );
    let steep_bottom = polynomial(
        u,
        [
            1.0,
            1.965_127_166_743_925_712_92e1,
            1.376_577_541_435_190_426_00e2,
            4.345_658_774_752_292_288_21e2,
            6.453_872_717_332_678_803_36e2,
            4.290_081_400_275_678_333_86e2,
            1.086_350_055_417_794_351_34e2,
            6.570_249_770_319_281_701_35e0,
            -6.042_441_521_485_809_874_38e-2,
        ],
    );
    let far_top = polynomial(
        u,
        [
            -9.864_942_924_700_099_285_97e-3,
            -7.992_832_376_805_230_065_74e-1,
            -1.775_795_491_775_475_198_89e1,
            -1.606_363_848_558_219_160_62e2,
            -6.375_664_433_683_896_277_22e2,
            -1.025_095_131_611_077_249_54e3,
            -4.835_191_916_086_513_970_19e2,
        ],
    );
    let far_bottom = polynomial(
        u,
        [
            1.0,
            3.033_806_074_348_245_829_24e1,
            3.257_925_129_965_739_188_26e2,
            1.536_729_586_084_436_959_94e3,
            3.199_858_219_508_595_539_08e3,
            2.553_050_406_433_164_425_83e3,
            4.745_285_412_069_553_672_15e2,
            -2.244_095_244_658_581_833_62e1,
        ],
    );
    let top = if steep { steep_top } else { far_top };
    let top = if middle { middle_top } else { top };
    let top = if near { near_top } else { top };
    let bottom = if steep { steep_bottom } else { far_bottom };
    let bottom = if middle { middle_bottom } else { bottom };
    let bottom = if near { near_bottom } else { bottom };
    let ratio = top / bottom;
    // a² in two parts, the first exact.
    let head = f64::from_bits(a.to_bits() & 0xffff_ffff_0000_0000);
    let tail =
        exp(-head * head - 0.5625) * exp((head - a) * (head + a) + if middle { 0.0 } else { ratio }) / a;
    let tail = if a >= VANISHED { 0.0 } else { tail };
    let beyond = if middle { 1.0 - ERX - ratio } else { tail };
    let beyond = if x < 0.0 { 2.0 - beyond } else { beyond };
    let bend = x + x * ratio;
    let within = if x < 0.25 { 1.0 - bend } else { 0.5 - (x - 0.5 + x * ratio) };
    if near { within } else { beyond }
}

/// Φ(x), the probability below `x` of the standard normal distribution; 0 below −37, where it is below 1e-300.
#[inline(always)]
#[must_use]
pub fn normal_cdf(x: f64) -> f64 {
    0.5 * erfc(-x * FRAC_1_SQRT_2)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn units(a: f64, b: f64) -> u64 {
        a.to_bits().abs_diff(b.to_bits())
    }

    #[test]
    fn agrees_with_the_functions_with_branches() {
        let mut x = 1e-300;
        while x < 1e300 {
            assert!(units(ln(x), libm::log(x)) <= 1, "ln {x}");
            x *= 1.013_7;
        }
        for x in [1.0, 0.5, 2.0, f64::MIN_POSITIVE, f64::MAX] {
            assert_eq!(ln(x), libm::log(x));
        }
        for i in -26_000..26_000 {
            let x = f64::from(i) * 1.001e-3;
            let (found, expected) = (erfc(x), libm::erfc(x));
            assert!(units(found, expected) <= 4, "erfc {x}: {found} {expected}");
        }
        for i in -7000..6900 {
            let x = f64::from(i) * 0.1007;
            assert!(units(exp(x), libm::exp(x)) <= 2, "exp {x}");
        }
    }

    #[test]
    fn sine_of_the_first_quarter() {
        for i in 0..=10_000 {
            let x = core::f64::consts::FRAC_PI_2 * f64::from(i) / 10_000.0;
            assert!(units(quarter_sine(x), libm::sin(x)) <= 2, "sin {x}");
        }
    }

    #[test]
    fn the_far_ends() {
        assert_eq!((normal_cdf(-40.0), normal_cdf(40.0)), (0.0, 1.0));
        assert_eq!((normal_cdf(f64::NEG_INFINITY), normal_cdf(f64::INFINITY)), (0.0, 1.0));
        assert_eq!(normal_cdf(0.0), 0.5);
        assert!(normal_cdf(f64::NAN).is_nan());
    }
}
