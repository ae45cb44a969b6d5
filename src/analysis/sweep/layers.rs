//! What a decision is made from, in layers, each of which depends on some of the axes only: liquid, condition (liquid and surface), stream,
//! edge, rounding. A layer that takes few distinct values over the whole sweep is computed once for each; any other is kept from point to point
//! while its axes stand still.

use std::sync::atomic::{AtomicBool, Ordering};

use rayon::prelude::*;

use super::{
    Cancelled,
    axis::{Axis, MOST_AXES},
    lanes::{Columns, Given, Numbers, columns, fill},
};
use crate::analysis::{
    balance::{Approach, StreamSlopes},
    decision::stream_inputs,
    doubt::{Doubt, EdgeDoubt, StreamDoubt},
    fault::Fault,
    field::Field,
    resolve::resolve_liquid,
    spec::Spec,
};
use crate::physics::{
    liquid::Liquid,
    quantity,
    separation::closed_form::{Edge, RimTerms},
    stream::approach_film,
};

/// A layer with more distinct values than this is not tabulated.
const MOST_ENTRIES: usize = 1 << 14;

/// The stable code of the first fault of a point.
pub(super) type Code = &'static str;

/// Liquid and surface of a point.
#[derive(Debug, Clone)]
pub(super) struct Conditioned {
    pub(super) liquid: Liquid,
    /// The angle that counts, rad.
    pub(super) contact_angle: f64,
    pub(super) doubt: Doubt,
}

/// The stream of a point.
#[derive(Debug, Clone)]
pub(super) struct Streaming {
    pub(super) approach: Approach,
    pub(super) slopes: StreamSlopes,
    pub(super) doubt: StreamDoubt,
}

/// Wetting and turn of a point's edge, and the variance of the turn.
#[derive(Debug, Clone, Copy)]
pub(super) struct Turned {
    pub(super) edge: Edge,
    pub(super) doubt: f64,
}

/// Rounding of a point's edge, and the variance of ln r.
#[derive(Debug, Clone, Copy)]
pub(super) struct Rounded {
    pub(super) rim: RimTerms,
    pub(super) doubt: f64,
}

/// Places on the axes.
pub(super) type Places = [usize; MOST_AXES];

/// Question and axes: what the layers are made from.
#[derive(Debug, Clone)]
pub(super) struct Ground {
    pub(super) base: Spec,
    pub(super) axes: Vec<Axis>,
}

impl Ground {
    /// The question at these places.
    pub(super) fn spec(&self, places: &Places) -> Spec {
        let mut spec = self.base;
        for (axis, place) in self.axes.iter().zip(places) {
            // The sweep was made only after every field was found in the base.
            axis.field().set(&mut spec, axis.at(*place));
        }
        spec
    }
}

/// Which distinct value of a layer belongs to which place.
#[derive(Debug, Clone)]
struct Keys {
    strides: Places,
    counts: Places,
    count: usize,
}

impl Keys {
    fn new(axes: &[Axis], affects: impl Fn(Field) -> bool) -> Self {
        let (mut strides, mut counts) = ([0; MOST_AXES], [1; MOST_AXES]);
        let mut count = 1_usize;
        for (i, axis) in axes.iter().enumerate().rev().filter(|(_, axis)| affects(axis.field())) {
            strides[i] = count;
            counts[i] = axis.len();
            count = count.saturating_mul(axis.len());
        }
        Self { strides, counts, count }
    }

    fn key(&self, places: &Places) -> usize {
        self.strides.iter().zip(places).map(|(stride, place)| stride * place).sum()
    }

    /// Places that have this key; on axes that do not matter the first.
    fn places(&self, key: usize) -> Places {
        let mut places = [0; MOST_AXES];
        for (place, (stride, count)) in places.iter_mut().zip(self.strides.iter().zip(self.counts)) {
            if *stride > 0 {
                *place = key / stride % count;
            }
        }
        places
    }
}

/// A layer: its keys and, where they are few, its values.
#[derive(Debug)]
pub(super) struct Layer<T> {
    keys: Keys,
    table: Vec<T>,
}

impl<T> Layer<T> {
    fn new(axes: &[Axis], affects: impl Fn(Field) -> bool) -> Self {
        Self { keys: Keys::new(axes, affects), table: Vec::new() }
    }

    /// The value at a key: tabulated, or the last one made.
    #[inline]
    fn known<'a>(&'a self, last: &'a Last<T>, key: usize) -> Option<&'a T> {
        self.table.get(key).or_else(|| last.as_ref().filter(|(at, _)| *at == key).map(|(_, value)| value))
    }
}

/// The last value of a layer that is not tabulated.
type Last<T> = Option<(usize, T)>;

/// All layers of a sweep.
#[derive(Debug)]
pub(super) struct Layers {
    liquid: Layer<Result<Liquid, Code>>,
    condition: Layer<Result<Conditioned, Code>>,
    stream: Layer<Result<Streaming, Code>>,
    edge: Layer<Result<Turned, Code>>,
    rim: Layer<Rounded>,
    wall: Layer<bool>,
    /// The same as columns, where the last axis may run along them.
    columns: LayerColumns,
}

/// Layers as columns of numbers.
#[derive(Debug, Default)]
struct LayerColumns {
    stream: Columns<14>,
    edge: Columns<7>,
    rim: Columns<4>,
}

/// The last values of the layers that are not tabulated: one desk for each worker.
#[derive(Default)]
pub(super) struct Desk {
    liquid: Last<Result<Liquid, Code>>,
    condition: Last<Result<Conditioned, Code>>,
    stream: Last<Result<Streaming, Code>>,
    edge: Last<Result<Turned, Code>>,
    rim: Last<Rounded>,
    wall: Last<bool>,
}

fn is_of_liquid(field: Field) -> bool {
    field.pointer().starts_with("/liquid/")
}

fn is_of_surface(field: Field) -> bool {
    field.pointer().starts_with("/surface/")
}

fn is_of_stream(field: Field) -> bool {
    is_of_liquid(field)
        || field == Field::Flow
        || field.pointer().starts_with("/lip/section/")
        || field.pointer().starts_with("/lip/run/")
}

impl Layers {
    /// The layers of a sweep of `rows` points, tabulated where that saves work.
    pub(super) fn new(ground: &Ground, rows: usize, cancelled: &AtomicBool) -> Result<Self, Cancelled> {
        let axes = ground.axes.as_slice();
        let mut layers = Self {
            liquid: Layer::new(axes, is_of_liquid),
            condition: Layer::new(axes, |f| is_of_liquid(f) || is_of_surface(f)),
            stream: Layer::new(axes, is_of_stream),
            edge: Layer::new(axes, |f| is_of_liquid(f) || is_of_surface(f) || f == Field::Turn),
            rim: Layer::new(axes, |f| f == Field::EdgeRadius),
            wall: Layer::new(axes, |f| f == Field::Turn || f == Field::Slope),
            columns: LayerColumns::default(),
        };
        macro_rules! tabulate {
            ($($layer:ident),*) => {$(
                let count = layers.$layer.keys.count;
                if count <= MOST_ENTRIES && count <= (rows / 2).max(1) {
                    layers.$layer.table = (0..count)
                        .into_par_iter()
                        .map_init(Desk::default, |desk, key| {
                            if cancelled.load(Ordering::Relaxed) {
                                return Err(Cancelled);
                            }
                            Ok(layers.$layer(ground, desk, &layers.$layer.keys.places(key)))
                        })
                        .collect::<Result<Vec<_>, Cancelled>>()?;
                }
            )*};
        }
        // Each stands on those before it.
        tabulate!(liquid, condition, stream, edge, rim, wall);
        layers.columns = LayerColumns {
            stream: columns(layers.stream.table.iter().map(|entry| entry.clone().ok())),
            edge: columns(layers.edge.table.iter().map(|entry| entry.ok())),
            rim: columns(layers.rim.table.iter().map(|entry| Some(*entry))),
        };
        Ok(layers)
    }

    fn liquid(&self, ground: &Ground, _: &mut Desk, places: &Places) -> Result<Liquid, Code> {
        let properties = resolve_liquid(&ground.spec(places).liquid).map_err(|faults| first(&faults))?;
        Ok(properties.liquid())
    }

    fn condition(&self, ground: &Ground, _: &mut Desk, places: &Places) -> Result<Conditioned, Code> {
        let condition = ground.spec(places).condition().map_err(|faults| first(&faults))?;
        let mut doubt = Doubt::default();
        for input in &condition.inputs {
            doubt.add(&input.shift);
        }
        let liquid = condition.liquid.liquid();
        Ok(Conditioned { liquid, contact_angle: condition.contact_angle, doubt })
    }

    fn stream(&self, ground: &Ground, desk: &mut Desk, places: &Places) -> Result<Streaming, Code> {
        let key = self.liquid.keys.key(places);
        let liquid = match self.liquid.known(&desk.liquid, key) {
            Some(liquid) => *liquid,
            None => desk.liquid.insert((key, self.liquid(ground, &mut Desk::default(), places))).1,
        };
        approaching(&ground.spec(places), &liquid?)
    }

    fn edge(&self, ground: &Ground, desk: &mut Desk, places: &Places) -> Result<Turned, Code> {
        let key = self.condition.keys.key(places);
        let angle = |condition: &Result<Conditioned, Code>| {
            condition.as_ref().map(|c| c.contact_angle).map_err(|code| *code)
        };
        let angle = match self.condition.known(&desk.condition, key) {
            Some(condition) => angle(condition),
            None => {
                let made = self.condition(ground, &mut Desk::default(), places);
                angle(&desk.condition.insert((key, made)).1)
            }
        };
        let spec = ground.spec(places);
        let edge = Edge::new(spec.coefficients, angle?, spec.turn_deg * quantity::TURN.to_si);
        Ok(Turned { edge, doubt: edge_doubt(&spec).turn })
    }

    fn rim(&self, ground: &Ground, _: &mut Desk, places: &Places) -> Rounded {
        let spec = ground.spec(places);
        let rim = RimTerms::of(spec.coefficients, spec.radius_mm * quantity::EDGE_RADIUS.to_si);
        Rounded { rim, doubt: edge_doubt(&spec).radius }
    }

    fn wall(&self, ground: &Ground, _: &mut Desk, places: &Places) -> bool {
        ground.spec(places).wall_falls()
    }

    /// The keys of all layers at these places.
    pub(super) fn keys(&self, places: &Places) -> Keyring {
        Keyring {
            condition: self.condition.keys.key(places),
            stream: self.stream.keys.key(places),
            edge: self.edge.keys.key(places),
            rim: self.rim.keys.key(places),
            wall: self.wall.keys.key(places),
        }
    }

    /// Makes the layers that stand still along the last axis and are not tabulated.
    pub(super) fn make_still(
        &self,
        ground: &Ground,
        desk: &mut Desk,
        places: &Places,
        (keys, steps): (&Keyring, &Keyring),
    ) {
        macro_rules! make {
            ($($layer:ident),*) => {$(
                if steps.$layer == 0 && self.$layer.known(&desk.$layer, keys.$layer).is_none() {
                    let made = self.$layer(ground, desk, places);
                    desk.$layer = Some((keys.$layer, made));
                }
            )*};
        }
        make!(condition, wall, stream, edge, rim);
    }

    /// What `run` neighbouring points along the last axis are judged by, side by side, and the liquid and surface that they share. None where they do not
    /// share them, or where one of them is at fault or has to be computed by itself.
    pub(super) fn fill<'a>(
        &'a self,
        given: &mut Given,
        desk: &'a Desk,
        (keys, steps): (&Keyring, &Keyring),
        run: usize,
    ) -> Option<&'a Conditioned> {
        if steps.condition != 0 {
            return None;
        }
        let condition = self.condition.known(&desk.condition, keys.condition)?.as_ref().ok()?;
        let falls = if steps.wall == 0 {
            *self.wall.known(&desk.wall, keys.wall)?
        } else {
            self.wall.table.get(keys.wall..keys.wall + run)?.iter().all(|falls| *falls)
        };
        if !falls {
            return None;
        }
        let stream = self.stream.known(&desk.stream, keys.stream);
        let edge = self.edge.known(&desk.edge, keys.edge);
        let rim = self.rim.known(&desk.rim, keys.rim);
        let stream = stream.and_then(|s| s.as_ref().ok()).map(Numbers::numbers);
        let edge = edge.and_then(|e| e.as_ref().ok()).map(Numbers::numbers);
        fill(&mut given.stream, &self.columns.stream, (keys.stream, steps.stream, run), stream)?;
        fill(&mut given.edge, &self.columns.edge, (keys.edge, steps.edge, run), edge)?;
        fill(&mut given.rim, &self.columns.rim, (keys.rim, steps.rim, run), rim.map(Numbers::numbers))?;
        Some(condition)
    }

    /// Everything that a point is judged by, or the code of its first fault.
    #[inline]
    pub(super) fn parts<'a>(
        &'a self,
        ground: &Ground,
        desk: &'a mut Desk,
        places: &Places,
        keys: &Keyring,
    ) -> Result<Parts<'a>, Code> {
        macro_rules! make_missing {
            ($($layer:ident),*) => {$(
                if self.$layer.known(&desk.$layer, keys.$layer).is_none() {
                    let made = self.$layer(ground, desk, places);
                    desk.$layer = Some((keys.$layer, made));
                }
            )*};
        }
        make_missing!(condition, wall, stream, edge, rim);
        // They have just been made; the code is never seen.
        const MISSING: Code = "invalid";
        let desk = &*desk;
        let condition = self.condition.known(&desk.condition, keys.condition).ok_or(MISSING)?;
        let condition = condition.as_ref().map_err(|code| *code)?;
        if !*self.wall.known(&desk.wall, keys.wall).ok_or(MISSING)? {
            return Err("contradiction");
        }
        let stream = self.stream.known(&desk.stream, keys.stream).ok_or(MISSING)?;
        let edge = self.edge.known(&desk.edge, keys.edge).ok_or(MISSING)?;
        Ok(Parts {
            condition,
            stream: stream.as_ref().map_err(|code| *code)?,
            edge: edge.as_ref().map_err(|code| *code)?,
            rim: self.rim.known(&desk.rim, keys.rim).ok_or(MISSING)?,
        })
    }
}

/// The keys of the layers at some places.
#[derive(Debug, Clone, Copy)]
pub(super) struct Keyring {
    condition: usize,
    stream: usize,
    edge: usize,
    rim: usize,
    wall: usize,
}

impl Layers {
    /// What one step along this axis adds to the keys.
    pub(super) fn steps(&self, axis: usize) -> Keyring {
        let mut places = [0; MOST_AXES];
        if let Some(place) = places.get_mut(axis) {
            *place = 1;
        }
        self.keys(&places)
    }
}

impl Keyring {
    /// Takes one step.
    #[inline]
    pub(super) fn advance(&mut self, by: &Self) {
        self.condition += by.condition;
        self.stream += by.stream;
        self.edge += by.edge;
        self.rim += by.rim;
        self.wall += by.wall;
    }
}

/// Everything that a point is judged by.
pub(super) struct Parts<'a> {
    pub(super) condition: &'a Conditioned,
    pub(super) stream: &'a Streaming,
    pub(super) edge: &'a Turned,
    pub(super) rim: &'a Rounded,
}

fn first(faults: &[Fault]) -> Code {
    faults.first().map_or("invalid", |fault| fault.code)
}

fn edge_doubt(spec: &Spec) -> EdgeDoubt {
    let mut doubt = EdgeDoubt::default();
    for input in spec.lip_inputs() {
        doubt.add(&input.shift, spec.radius_mm * quantity::EDGE_RADIUS.to_si);
    }
    doubt
}

fn approaching(spec: &Spec, liquid: &Liquid) -> Result<Streaming, Code> {
    const CODE: Code = "not_computable";
    let lip = spec.lip();
    let flow = spec.flow_ml_s * quantity::FLOW.to_si;
    let stream = approach_film(&lip.section, &lip.run, liquid, flow).map_err(|_| CODE)?;
    let slopes = StreamSlopes::of(&lip, liquid, &stream, flow).map_err(|_| CODE)?;
    let mut doubt = StreamDoubt::new(&slopes);
    for input in spec.lip_inputs().iter().chain(&stream_inputs(&stream)) {
        doubt.add(&input.shift, &slopes);
    }
    let approach = Approach::of(spec.coefficients, liquid, stream, stream.thickness);
    Ok(Streaming { approach, slopes, doubt })
}
