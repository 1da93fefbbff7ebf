//! Two lists paired by what their entries are known by.

/// Pairs entries of equal keys, the n-th with the n-th: first all of `after` in its order, then
/// what only `before` has.
pub(super) fn paired<'a, T, K: PartialEq>(
    before: &'a [T],
    after: &'a [T],
    key: impl Fn(&'a T) -> K,
) -> Vec<(Option<&'a T>, Option<&'a T>)> {
    let mut left: Vec<Option<(K, &T)>> =
        before.iter().map(|item| Some((key(item), item))).collect();
    let mut pairs = Vec::with_capacity(after.len());
    for item in after {
        let wanted = key(item);
        let partner = left.iter_mut().find(|slot| slot.as_ref().is_some_and(|(k, _)| *k == wanted));
        pairs.push((partner.and_then(Option::take).map(|(_, item)| item), Some(item)));
    }
    pairs.extend(left.into_iter().flatten().map(|(_, item)| (Some(item), None)));
    pairs
}
