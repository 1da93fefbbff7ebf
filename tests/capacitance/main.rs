//! Capacitance against values from outside: closed forms, integral equations, finite elements.

mod closed_forms;
mod command;
mod geojson;
mod sections;
