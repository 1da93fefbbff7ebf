//! Capacitance against values from outside: closed forms, integral equations, finite elements.

mod accuracy;
mod closed_forms;
mod command;
mod gates;
mod geojson;
mod reference;
mod sections;
mod shapes;
