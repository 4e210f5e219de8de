//! Models with uncertain parameters, and what is made of many draws.

use restpoint::analysis::uncertain::draw::{Plan, Sampling};
use restpoint::model::Model;
use restpoint::model::load::{Files, load};

/// A file of draws, whatever it is called.
struct Table<'t>(&'t str);

impl Files for Table<'_> {
    fn read(&self, _path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        Ok(self.0.as_bytes().to_vec())
    }
}

/// A model with these parameters and further lines, and the file of draws that they name.
pub(crate) fn model_with(parameters: &str, lines: &str, table: &str) -> Model {
    let text = format!(
        "title: T\ntime: yr\nspecies: {{N: {{upper: 9}}, P: {{upper: 9}}}}\nchange: {{N: 1, P: 1}}\n\
         parameters: {{{parameters}}}\n{lines}\n"
    );
    let (model, _, said) = load("model", text.as_bytes(), &Table(table));
    model.unwrap_or_else(|| panic!("{text}: {said:?}"))
}

pub(crate) fn model(parameters: &str) -> Model {
    model_with(parameters, "", "")
}

/// The values of all draws, a list for each parameter.
pub(crate) fn columns(model: &Model, plan: &Plan) -> Vec<Vec<f64>> {
    let mut columns = vec![Vec::new(); model.parameters.len()];
    let mut values = model.base_values();
    for i in 0..plan.draws() {
        plan.draw(i, 0, &mut values, &mut [0.0; 2]);
        columns.iter_mut().zip(&values).for_each(|(column, value)| column.push(*value));
    }
    columns
}

/// The values of one parameter `x` that is drawn so.
pub(crate) fn drawn(parameter: &str, sampling: Sampling, draws: u64) -> Vec<f64> {
    let model = model(&format!("x: {parameter}"));
    let plan = Plan::new(&model, sampling, 11, Some(draws)).expect("a plan");
    columns(&model, &plan).swap_remove(0)
}
