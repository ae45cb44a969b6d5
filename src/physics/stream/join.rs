//! Smooth joins of two laws: once differentiable, and exactly one of the two laws away from the join.

/// 0 below 0, 1 above 1, 3x² − 2x³ between.
pub(super) fn smoothstep(x: f64) -> f64 {
    let x = x.clamp(0.0, 1.0);
    x * x * (3.0 - 2.0 * x)
}

/// The smaller of `a` and `b`, rounded off where they differ by less than `width`, and the share of `b` in it
/// (0..1).
///
/// min(a, b) − (w − |a − b|)²/(4w); its derivatives with respect to `a` and `b` are 1 − share and share, so
/// the result grows with both and never faster than the faster of the two.
pub(super) fn smooth_min(a: f64, b: f64, width: f64) -> (f64, f64) {
    let gap = a - b;
    let share = (0.5 + 0.5 * gap / width).clamp(0.0, 1.0);
    let inside = (width - gap.abs()).max(0.0);
    (a.min(b) - inside * inside / (4.0 * width), share)
}

/// `value` raised softly where it falls below `floor`: untouched from the floor up, `floor − width/2` far
/// below it.
///
/// With d = floor − value: value + d²/(2w) up to d = w, floor − w/2 beyond. Grows with both, never faster
/// than the faster.
pub(super) fn soft_floor(value: f64, floor: f64, width: f64) -> f64 {
    let depth = (floor - value).max(0.0);
    if depth < width { value + 0.5 * depth * depth / width } else { floor - 0.5 * width }
}

#[cfg(test)]
mod tests {
    use super::{smooth_min, smoothstep, soft_floor};

    #[test]
    fn joins_are_exact_away_from_the_join() {
        assert_eq!(smooth_min(1.0, 2.0, 0.1), (1.0, 0.0));
        assert_eq!(smooth_min(2.0, 1.0, 0.1), (1.0, 1.0));
        assert_eq!(soft_floor(1.0, 1.0, 0.1), 1.0);
        assert!((soft_floor(0.0, 1.0, 0.1) - 0.95).abs() < 1e-15);
        assert_eq!((smoothstep(-1.0), smoothstep(0.5), smoothstep(2.0)), (0.0, 0.5, 1.0));
    }

    #[test]
    fn joins_grow_with_both_and_have_no_kink() {
        let (mut last, mut last_slope) = (None::<(f64, f64)>, None::<(f64, f64)>);
        for i in 0..=4000 {
            let x = f64::from(i) * 1e-4 - 0.2;
            let now = (smooth_min(x, 0.0, 0.1).0, soft_floor(x, 0.0, 0.1));
            if let Some(before) = last {
                let slope = ((now.0 - before.0) * 1e4, (now.1 - before.1) * 1e4);
                assert!(
                    slope.0 >= -1e-9 && slope.0 <= 1.0 + 1e-9 && slope.1 >= -1e-9 && slope.1 <= 1.0 + 1e-9
                );
                if let Some(steep) = last_slope {
                    assert!((slope.0 - steep.0).abs() < 2e-3 && (slope.1 - steep.1).abs() < 2e-3, "{x}");
                }
                last_slope = Some(slope);
            }
            last = Some(now);
        }
    }
}
