//! Minimum and maximum of channels in each pixel column, and the path of each gear's swing.

use super::TraceRequest;
use crate::equations::Equations;
use crate::results::{Column, Swing, Trace, Traces};

/// Points of a swing path before every second one is dropped.
const SWING_LIMIT: usize = 60_000;

/// Traces while the run goes on.
pub struct Tracer {
    request: TraceRequest,
    columns: Vec<Vec<Option<Column>>>,
    swings: Vec<Vec<[f64; 3]>>,
    stride: usize,
    skipped: usize,
}

impl Tracer {
    /// Empty traces.
    pub fn new(request: TraceRequest, magnets: usize) -> Self {
        let columns = vec![vec![None; request.columns]; request.channels.len()];
        Self { request, columns, swings: vec![Vec::new(); magnets], stride: 1, skipped: 0 }
    }

    /// Width of one column, s.
    pub fn column_width(&self) -> f64 {
        (self.request.end - self.request.start) / self.request.columns.max(1) as f64
    }

    /// True when a stretch of time touches the window.
    pub fn touches(&self, start: f64, end: f64) -> bool {
        end >= self.request.start && start <= self.request.end
    }

    /// The channels traced.
    pub fn channels(&self) -> &[usize] {
        &self.request.channels
    }

    /// Column of a time; a border belongs to both sides and is noted by the caller from each.
    pub fn column(&self, time: f64) -> Option<usize> {
        if time < self.request.start || time > self.request.end {
            return None;
        }
        let place = ((time - self.request.start) / self.column_width()) as usize;
        Some(place.min(self.request.columns.saturating_sub(1)))
    }

    /// Takes the values of all channels at a time.
    pub fn note(&mut self, time: f64, channels: &[f64]) {
        let Some(place) = self.column(time) else { return };
        for (columns, &channel) in self.columns.iter_mut().zip(&self.request.channels) {
            Column::take(&mut columns[place], channels[channel]);
        }
    }

    /// Takes one point of a magnet's path.
    pub fn swing(&mut self, point: &dyn Fn(usize) -> [f64; 3]) {
        if !self.request.swings {
            return;
        }
        self.skipped += 1;
        if self.skipped < self.stride {
            return;
        }
        self.skipped = 0;
        for (magnet, path) in self.swings.iter_mut().enumerate() {
            path.push(point(magnet));
        }
        if self.swings.first().is_some_and(|path| path.len() > SWING_LIMIT) {
            for path in &mut self.swings {
                let mut index = 0;
                path.retain(|_| {
                    index += 1;
                    index % 2 == 1
                });
            }
            self.stride *= 2;
        }
    }

    /// The traces as results.
    pub fn finish(self, equations: &Equations) -> Traces {
        let channels = &equations.model.channels;
        let swings = if self.request.swings { self.swings } else { Vec::new() };
        Traces {
            start: self.request.start,
            end: self.request.end,
            traces: self
                .request
                .channels
                .iter()
                .zip(self.columns)
                .map(|(&channel, columns)| Trace {
                    channel: channels[channel].name.clone(),
                    unit: channels[channel].unit,
                    columns,
                })
                .collect(),
            swings: swings
                .into_iter()
                .zip(&equations.model.magnets)
                .map(|(path, magnet)| Swing { gear: magnet.name.clone(), path, separatrix: None })
                .collect(),
        }
    }
}
