use crestfall::numerics::bspline::Curve;
use crestfall::numerics::root::bracketed;
use crestfall::numerics::smoothing::*;
use nalgebra::Vector3;
fn truth(u: f64) -> [Vector3<f64>; 3] {
    let (a, k, b, m) = (8.0, 0.16, 6.0, 0.11);
    [
        Vector3::new(u, a * (k * u).sin(), b * (m * u + 1.0).cos()),
        Vector3::new(1.0, a * k * (k * u).cos(), -b * m * (m * u + 1.0).sin()),
        Vector3::new(
            0.0,
            -a * k * k * (k * u).sin(),
            -b * m * m * (m * u + 1.0).cos(),
        ),
    ]
}
fn kvec(r1: Vector3<f64>, r2: Vector3<f64>) -> Vector3<f64> {
    let n = r1.norm();
    let t = r1 / n;
    (r2 - t * t.dot(&r2)) / (n * n)
}
struct Rng(u64);
impl Rng {
    fn u(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1u64 << 53) as f64
    }
    fn g(&mut self) -> f64 {
        let (a, b) = (self.u().max(1e-300), self.u());
        (-2.0 * a.ln()).sqrt() * (std::f64::consts::TAU * b).cos()
    }
}
fn perp(s: &Smoothed<3>, y: &[[f64; 3]]) -> (f64, f64) {
    let mut rss = 0.0;
    let mut tr = 0.0;
    for i in 0..y.len() {
        let e = Vector3::from(y[i]) - Vector3::from(s.fitted[i]);
        let t = Vector3::from(s.slopes[i]).normalize();
        let e = e - t * t.dot(&e);
        rss += e.norm_squared();
        tr += s.leverages[i];
    }
    (rss, tr)
}
fn main() {
    let umax = 330.0;
    for h in [0.1, 0.25, 0.5, 1.0] {
        for (name, kind) in [("1mm", 0.001), ("1cm", 0.01), ("gauss2mm", -0.002)] {
            let mut stat = vec![];
            for rep in 0..10u64 {
                let mut rng = Rng(88172645463325252 ^ (rep * 7919 + 1));
                // points at arc spacing h
                let mut us = vec![0.05 * rng.u()];
                loop {
                    let u = *us.last().unwrap();
                    let du = h / truth(u)[1].norm();
                    let um = u + du / 2.0;
                    let n = u + h / truth(um)[1].norm();
                    if n > umax {
                        break;
                    }
                    us.push(n);
                }
                let n = us.len();
                let y: Vec<[f64; 3]> = us
                    .iter()
                    .map(|&u| {
                        let r = truth(u)[0];
                        let f = |x: f64, rng: &mut Rng| {
                            if kind > 0.0 {
                                (x / kind).round() * kind
                            } else {
                                x - kind * rng.g()
                            }
                        };
                        [f(r.x, &mut rng), f(r.y, &mut rng), f(r.z, &mut rng)]
                    })
                    .collect();
                let sigma = if kind > 0.0 {
                    kind / 12f64.sqrt()
                } else {
                    -kind
                };
                let mut p = vec![0.0];
                for i in 1..n {
                    p.push(p[i - 1] + (Vector3::from(y[i]) - Vector3::from(y[i - 1])).norm());
                }
                let exact = Curve::interpolating(&p, &y);
                let sm = Smoother::new(&p, &vec![1.0; n]);
                let b = sm.balanced().ln();
                let g = |l: f64| {
                    let s = sm.smoothed(l.exp(), &y).unwrap();
                    let (rss, tr) = perp(&s, &y);
                    rss / (2.0 * sigma * sigma) - (n as f64 - tr)
                };
                let l = bracketed(b - 25.0, b + 25.0, 1e-4, g);
                let w = sm.smoothed(l.exp(), &y).unwrap();
                let gcv = |l: f64| match sm.smoothed(l.exp(), &y) {
                    None => f64::INFINITY,
                    Some(s) => {
                        let (rss, tr) = perp(&s, &y);
                        rss / (1.0 - tr / n as f64).powi(2)
                    }
                };
                let mut best = (f64::INFINITY, 0.0);
                let mut x = b - 25.0;
                while x < b + 25.0 {
                    let v = gcv(x);
                    if v < best.0 {
                        best = (v, x);
                    }
                    x += 0.25;
                }
                let c = sm.smoothed(best.1.exp(), &y).unwrap();
                let (rss, tr) = perp(&c, &y);
                let sg = (rss / 2.0 / (n as f64 - tr)).sqrt();
                let f = 25.0f64.powi(2) / 9.80665;
                let mut row = vec![];
                for (which, cv, post, sd) in [
                    (0, exact.clone(), None, 0.0),
                    (1, w.curve(), Some(&w.posterior), sigma),
                    (2, c.curve(), Some(&c.posterior), sg),
                ] {
                    let (mut worst, mut ss, mut cnt, mut cover, mut band) =
                        (0f64, 0.0, 0.0, 0.0, 0.0);
                    let (mut ecov, mut ecnt, mut ess, mut eband) = (0.0, 0.0, 0.0, 0.0);
                    for i in 0..n {
                        let d = cv.at(p[i]);
                        let k = kvec(Vector3::from(d[1]), Vector3::from(d[2]));
                        let [_, t1, t2] = truth(us[i]);
                        let kt = kvec(t1, t2);
                        let e = f * (k.norm() - kt.norm());
                        let bd = post.map_or(0.0, |q| 2.0 * f * sd * q.variance(p[i], 2).sqrt());
                        let interior = p[i] > 5.0 && p[i] < p[n - 1] - 5.0 && i >= 8 && i < n - 8;
                        if interior {
                            worst = worst.max(e.abs());
                            ss += e * e;
                            cnt += 1.0;
                            if e.abs() <= bd {
                                cover += 1.0;
                            }
                            band += bd;
                        } else {
                            ecnt += 1.0;
                            if e.abs() <= bd {
                                ecov += 1.0;
                            }
                            ess += e * e;
                            eband += bd;
                        }
                    }
                    let _ = which;
                    row.push((
                        worst,
                        (ss / cnt).sqrt(),
                        cover / cnt,
                        band / cnt / (ss / cnt).sqrt(),
                        ecov / ecnt,
                        (ess / ecnt).sqrt(),
                        eband / ecnt / (ess / ecnt).sqrt(),
                    ));
                }
                stat.push((row, l - b, best.1 - b, sg / sigma));
            }
            let k = stat.len() as f64;
            print!("h={h} {name:9}");
            for j in 0..3 {
                let a = |g: fn(&(f64, f64, f64, f64, f64, f64, f64)) -> f64| {
                    stat.iter().map(|s| g(&s.0[j])).sum::<f64>() / k
                };
                print!(
                    " | worst {:.4} rms {:.4} cov {:.3} w/rms {:.2} end cov {:.3} rms {:.3} {:.2}",
                    a(|x| x.0),
                    a(|x| x.1),
                    a(|x| x.2),
                    a(|x| x.3),
                    a(|x| x.4),
                    a(|x| x.5),
                    a(|x| x.6)
                );
            }
            println!(
                " | lam {:.2} {:.2} sg {:.3}",
                stat[0].1,
                stat[0].2,
                stat.iter().map(|s| s.3).sum::<f64>() / k
            );
        }
    }
}
