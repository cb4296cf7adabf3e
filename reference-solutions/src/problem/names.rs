//! Which names a formula may use, and in which order named sub-expressions depend on each other.

use std::collections::BTreeMap;

/// The names in `definitions` ordered so that each stands after those it uses; on a circle, the names along it.
pub(super) fn by_dependency<'a>(definitions: &BTreeMap<&'a str, &str>) -> Result<Vec<&'a str>, Vec<&'a str>> {
    let mut order = Vec::with_capacity(definitions.len());
    let mut path = Vec::new();
    for name in definitions.keys() {
        visit(name, definitions, &mut path, &mut order)?;
    }
    Ok(order)
}

fn visit<'a>(
    name: &'a str,
    definitions: &BTreeMap<&'a str, &str>,
    path: &mut Vec<&'a str>,
    order: &mut Vec<&'a str>,
) -> Result<(), Vec<&'a str>> {
    if order.contains(&name) {
        return Ok(());
    }
    if let Some(start) = path.iter().position(|known| *known == name) {
        let mut circle = path.split_off(start);
        circle.push(name);
        return Err(circle);
    }
    path.push(name);
    for word in words(definitions[name]) {
        if let Some((used, _)) = definitions.get_key_value(word) {
            visit(used, definitions, path, order)?;
        }
    }
    path.pop();
    order.push(name);
    Ok(())
}

/// The identifiers of a text.
fn words(text: &str) -> impl Iterator<Item = &str> {
    text.split(|c: char| !(c.is_alphanumeric() || c == '_')).filter(|word| word.starts_with(|c: char| !c.is_numeric()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn orders_definitions_and_finds_circles() {
        let definitions = BTreeMap::from([("a", "b + c"), ("b", "2*c"), ("c", "x")]);
        assert_eq!(by_dependency(&definitions), Ok(vec!["c", "b", "a"]));
        let circular = BTreeMap::from([("a", "sin(b)"), ("b", "1 + c"), ("c", "a*x")]);
        assert_eq!(by_dependency(&circular), Err(vec!["a", "b", "c", "a"]));
    }
}
