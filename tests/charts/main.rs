//! Charts drawn on synthetic data: their structure is checked, and with `CHART_GALLERY=DIR` set
//! every picture is written there to be looked at.

#[cfg(test)]
mod formats;
#[cfg(test)]
mod gallery;
#[cfg(test)]
mod odd;
#[cfg(test)]
mod pendulum;
#[cfg(test)]
mod planes;
#[cfg(test)]
mod run;
#[cfg(test)]
mod schematics;
#[cfg(test)]
mod structure;
#[cfg(test)]
mod studies;
