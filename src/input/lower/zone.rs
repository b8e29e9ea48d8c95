//! Lowers zones, and what a scenario sets differently in one.

use crate::input::dimension::{Force, Speed};
use crate::input::field::{At, Field, Located, Text};
use crate::input::lower::{Lower, Names};
use crate::input::quantity::Quantity;
use crate::input::written::operation::{ZoneKeys, ZoneKind, ZoneSettings};
use crate::input::{Device, Zone};

/// A zone with its kind, which a scenario's settings must fit.
#[derive(Clone, Debug)]
pub(super) struct Kept {
    pub(super) zone: Zone,
    kind: ZoneKind,
}

/// Zones in file order, and whether all of them could be read.
pub(super) fn zones(list: Vec<Field<ZoneKeys>>, lower: &mut Lower) -> (Vec<Kept>, bool) {
    let count = list.len();
    let mut names = Names::of("zone");
    let mut kept = Vec::new();
    for entry in list.into_iter().filter_map(Field::given) {
        kept.extend(zone(entry, &mut names, lower));
    }
    let whole = kept.len() == count;
    (kept, whole)
}

fn zone(entry: Located<ZoneKeys>, names: &mut Names, lower: &mut Lower) -> Option<Kept> {
    let (at, keys) = (entry.at, entry.value);
    let name = lower.require(keys.name, &at, "name");
    if let Some(name) = &name {
        names.add(name, lower);
    }
    let kind = lower.require(keys.kind, &at, "kind");
    let from = lower.require(keys.from, &at, "from");
    let to = lower.require(keys.to, &at, "to");
    let settings = ZoneSettings {
        thrust: keys.thrust,
        cap: keys.cap,
        speed: keys.speed,
        force: keys.force,
        peak_force: keys.peak_force,
        critical_speed: keys.critical_speed,
        release_speed: keys.release_speed,
    };
    let kind = kind?.value;
    let device = Read::from(settings, lower).device(kind, None, &at, lower);
    let (name, from, to) = (name?, from?, to?);
    let (from_m, to_m) = (lower.not_negative(&from), lower.not_negative(&to));
    if from_m == to_m {
        let message = format!(
            "zone `{}` begins and ends at {from_m} m, expected some length",
            name.value.0
        );
        lower.error(&at, message);
    }
    let zone = Zone {
        name: name.value.0,
        from_m,
        to_m,
        device: device?,
        place: lower.place(&at),
    };
    Some(Kept { zone, kind })
}

impl Kept {
    /// Sets what a scenario sets.
    pub(super) fn set(&mut self, settings: Located<ZoneSettings>, lower: &mut Lower) {
        let at = settings.at;
        let read = Read::from(settings.value, lower);
        if let Some(device) = read.device(self.kind, Some(self.zone.device), &at, lower) {
            self.zone.device = device;
        }
    }

    /// Whether a name is this zone's.
    pub(super) fn is(&self, name: &Located<Text>) -> bool {
        self.zone.name == name.value.0
    }
}

/// One setting: not there, there but wrong, or there.
#[derive(Clone, Debug)]
enum Setting {
    Absent,
    Wrong,
    Is(f64, At),
}

/// All settings a zone may have, in SI.
struct Read {
    thrust: Setting,
    cap: Setting,
    speed: Setting,
    force: Setting,
    peak_force: Setting,
    critical_speed: Setting,
    release_speed: Setting,
}

impl Read {
    fn from(written: ZoneSettings, lower: &mut Lower) -> Self {
        Self {
            thrust: force(written.thrust, lower),
            cap: speed(written.cap, lower),
            speed: speed(written.speed, lower),
            force: force(written.force, lower),
            peak_force: force(written.peak_force, lower),
            critical_speed: speed(written.critical_speed, lower),
            release_speed: setting(written.release_speed, |speed| lower.not_negative(speed)),
        }
    }

    /// The device of a kind; a setting left out keeps its value in `before`.
    fn device(
        self,
        kind: ZoneKind,
        before: Option<Device>,
        at: &At,
        lower: &mut Lower,
    ) -> Option<Device> {
        self.refuse_others(kind, lower);
        let mut get = |setting: Setting, key: &str, kept: Option<f64>| match setting {
            Setting::Is(value, _) => Some(value),
            Setting::Wrong => None,
            Setting::Absent if kept.is_some() => kept,
            Setting::Absent => {
                lower.missing(at, key);
                None
            }
        };
        let kept = before.map(values);
        let first = kept.map(|values| values.0);
        let second = kept.map(|values| values.1);
        match kind {
            ZoneKind::Push => {
                let thrust_n = get(self.thrust, "thrust", first);
                let cap_m_s = get(self.cap, "cap", second);
                Some(Device::Push {
                    thrust_n: thrust_n?,
                    cap_m_s: cap_m_s?,
                })
            }
            ZoneKind::Hold => {
                let speed_m_s = get(self.speed, "speed", first);
                let force_n = get(self.force, "force", second);
                Some(Device::Hold {
                    speed_m_s: speed_m_s?,
                    force_n: force_n?,
                })
            }
            ZoneKind::Eddy => {
                let peak_force_n = get(self.peak_force, "peak_force", first);
                let critical_speed_m_s = get(self.critical_speed, "critical_speed", second);
                Some(Device::Eddy {
                    peak_force_n: peak_force_n?,
                    critical_speed_m_s: critical_speed_m_s?,
                })
            }
            ZoneKind::Clamp => {
                let force_n = get(self.force, "force", first);
                let release_speed_m_s = get(self.release_speed, "release_speed", second);
                Some(Device::Clamp {
                    force_n: force_n?,
                    release_speed_m_s: release_speed_m_s?,
                })
            }
        }
    }

    fn refuse_others(&self, kind: ZoneKind, lower: &mut Lower) {
        let (word, own): (_, [&str; 2]) = match kind {
            ZoneKind::Push => ("push", ["thrust", "cap"]),
            ZoneKind::Hold => ("hold", ["speed", "force"]),
            ZoneKind::Eddy => ("eddy", ["peak_force", "critical_speed"]),
            ZoneKind::Clamp => ("clamp", ["force", "release_speed"]),
        };
        let all = [
            ("thrust", &self.thrust),
            ("cap", &self.cap),
            ("speed", &self.speed),
            ("force", &self.force),
            ("peak_force", &self.peak_force),
            ("critical_speed", &self.critical_speed),
            ("release_speed", &self.release_speed),
        ];
        for (key, setting) in all {
            if let Setting::Is(_, at) = setting
                && !own.contains(&key)
            {
                let [first, second] = own;
                let hint = format!("it has `{first}` and `{second}`");
                let message = format!("a zone of kind `{word}` has no `{key}`");
                lower.error_with_hint(at, message, hint);
            }
        }
    }
}

fn force(field: Option<Field<Quantity<Force>>>, lower: &mut Lower) -> Setting {
    setting(field, |force| lower.above_zero(force))
}

fn speed(field: Option<Field<Quantity<Speed>>>, lower: &mut Lower) -> Setting {
    setting(field, |speed| lower.above_zero(speed))
}

fn setting<D>(
    field: Option<Field<Quantity<D>>>,
    check: impl FnOnce(&Located<Quantity<D>>) -> f64,
) -> Setting {
    match field {
        None | Some(Field::Missing) => Setting::Absent,
        Some(Field::Bad) => Setting::Wrong,
        Some(Field::Given(quantity)) => Setting::Is(check(&quantity), quantity.at),
    }
}

/// A device's two values, in the order in which [`Read::device`] asks for them.
fn values(device: Device) -> (f64, f64) {
    match device {
        Device::Push { thrust_n, cap_m_s } => (thrust_n, cap_m_s),
        Device::Hold { speed_m_s, force_n } => (speed_m_s, force_n),
        Device::Eddy {
            peak_force_n,
            critical_speed_m_s,
        } => (peak_force_n, critical_speed_m_s),
        Device::Clamp {
            force_n,
            release_speed_m_s,
        } => (force_n, release_speed_m_s),
    }
}
