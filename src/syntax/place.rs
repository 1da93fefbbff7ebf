//! Places: sites of an `at`, and heights.

use super::amount::{Item, Scale};
use super::cursor::{Cursor, Parsed};
use super::lex::TokenKind;
use super::tree::{Height, Pair, Place, Site};
use crate::diag::Diagnostic;
use crate::source::Spanned;
use crate::units::{Amount, Length, Share, Unit, UnitKind};

/// A site before the unit of its lengths is known.
enum RawSite {
    Space { left: Item, right: Option<Item> },
    Row(Site),
}

impl Cursor<'_> {
    /// `SITE {"," SITE}`
    pub fn sites(&mut self) -> Parsed<Vec<Site>> {
        let mut raw = vec![self.raw_site()?];
        while self.eat(TokenKind::Comma).is_some() {
            self.room_in_list(raw.len())?;
            raw.push(self.raw_site()?);
        }
        self.read_sites(raw)
    }

    /// `SITE PERCENT {"," SITE PERCENT}`
    pub fn shared_sites(&mut self) -> Parsed<Vec<(Site, Spanned<Share>)>> {
        let mut raw = vec![];
        let mut shares = vec![];
        loop {
            self.room_in_list(raw.len())?;
            raw.push(self.raw_site()?);
            shares.push(self.item("a share in percent")?);
            if self.eat(TokenKind::Comma).is_none() {
                break;
            }
        }
        let mut unit = None;
        let mut read = vec![];
        for share in shares.iter().rev() {
            unit = share.unit_as(UnitKind::Share).or(unit);
            read.push(self.read_exact(share, unit, &Scale::NET_SHARE)?);
        }
        read.reverse();
        Ok(self.read_sites(raw)?.into_iter().zip(read).collect())
    }

    fn raw_site(&mut self) -> Parsed<RawSite> {
        if self.word().is_some() {
            let row = self.name("a site")?;
            if self.eat(TokenKind::Colon).is_none() {
                return Err(Diagnostic::error(row.span, format!("`{}` is not a site", row.value))
                    .label("a space such as `32 nm`, or the n-th of a row such as `edge:2`"));
            }
            let space = self.ordinal()?;
            let span = self.since(row.span.start);
            return Ok(RawSite::Row(Site::Row { row, space, span }));
        }
        let left = self.item("a site")?;
        let right = match self.eat(TokenKind::Bar) {
            Some(_) => Some(self.item("the space on the right")?),
            None => None,
        };
        Ok(RawSite::Space { left, right })
    }

    fn ordinal(&mut self) -> Parsed<u32> {
        let Some(token) = self.peek().filter(|token| token.kind == TokenKind::Number) else {
            return Err(self.missing("the number of a space"));
        };
        let text = self.text(token.span);
        match text.parse() {
            Ok(number) if number > 0 => {
                self.next();
                Ok(number)
            }
            _ => Err(Diagnostic::error(token.span, format!("`{text}` counts no space"))
                .label("the spaces of a row are counted from 1")),
        }
    }

    fn read_sites(&self, raw: Vec<RawSite>) -> Parsed<Vec<Site>> {
        let mut unit: Option<Spanned<Unit>> = None;
        let mut sites = Vec::with_capacity(raw.len());
        for site in raw.into_iter().rev() {
            sites.push(match site {
                RawSite::Row(site) => site,
                RawSite::Space { left, right } => {
                    let mut read = |item: &Item| {
                        unit = item.unit_as(UnitKind::Length).or(unit);
                        self.read_exact::<Length>(item, unit, &Scale::SPACE)
                    };
                    let right = right.as_ref().map(&mut read).transpose()?;
                    let left = read(&left)?;
                    let span = right.map_or(left.span, |right| left.span.to(right.span));
                    Site::Space { left: left.value, right: right.map(|right| right.value), span }
                }
            });
        }
        sites.reverse();
        Ok(sites)
    }

    /// List of LENGTH, or of pairs LENGTH "|" LENGTH.
    pub fn pairs(&mut self) -> Parsed<Vec<Pair>> {
        let mut items = vec![];
        let mut paired = vec![];
        loop {
            self.room_in_list(paired.len())?;
            items.push(self.item("a space")?);
            let right = self.eat(TokenKind::Bar).is_some();
            paired.push(right);
            if right {
                items.push(self.item("the space on the right")?);
            }
            if self.eat(TokenKind::Comma).is_none() {
                break;
            }
        }
        let mut lengths = self.read_all(&items, &Scale::SPACE)?.into_iter();
        let mut pairs = Vec::with_capacity(paired.len());
        for paired in paired {
            if let Some(left) = lengths.next() {
                let right = if paired { lengths.next() } else { None };
                pairs.push(Pair { left, right });
            }
        }
        Ok(pairs)
    }

    /// `LENGTH (above | below) PLACE | PLACE`
    pub fn height(&mut self) -> Parsed<Height> {
        let start = self.here();
        if !self.sees(TokenKind::Number) {
            let place = self.place("a height")?;
            return Ok(Height { offset: Amount::default(), place, span: self.since(start) });
        }
        if let Some(number) = self.peek().filter(|token| self.text(token.span).starts_with('-')) {
            return Err(Diagnostic::error(number.span, "a height cannot be negative")
                .label("write `below` for a height under a place"));
        }
        let length = self.amount::<Length>(&Scale::HEIGHT)?.value;
        let below = self.eat_word("below");
        if !below && !self.eat_word("above") {
            return Err(self.missing("`above` or `below`"));
        }
        let nominal = if below { -length.nominal } else { length.nominal };
        let place = self.place("a place")?;
        Ok(Height { offset: Amount { nominal, ..length }, place, span: self.since(start) })
    }

    fn place(&mut self, what: &str) -> Parsed<Place> {
        let name = self.name(what).map_err(|message: Diagnostic| {
            message
                .help("a place is `lines` (line top), `floor` (line bottom) or the name of a layer")
        })?;
        Ok(match name.value.as_str() {
            "lines" => Place::Lines,
            "floor" => Place::Floor,
            // `above the lines` reads well, and is no place.
            _ if matches!(self.word(), Some("lines" | "floor")) => {
                return Err(Diagnostic::error(name.span, format!("`{}` is no place", name.value))
                    .label("leave it out"));
            }
            _ => Place::Layer(name),
        })
    }
}
