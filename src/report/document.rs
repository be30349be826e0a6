//! What a report says and in which order, independent of the format that it is written in.
//!
//! The report is built once as a [`Document`]; each writer (PDF, HTML, terminal) only decides how its blocks look.

use chrono::NaiveDate;

/// A whole report: what stands on every page, and the blocks in reading order.
#[derive(Debug, Clone, PartialEq)]
pub struct Document {
    pub title: String,
    /// One line that says what the report is about; goes into the properties of the file.
    pub subject: String,
    pub author: Option<String>,
    /// The user's own document number.
    pub reference: Option<String>,
    pub revision: Option<String>,
    /// The date that the report bears. Nothing else about the time of writing enters the file.
    pub date: NaiveDate,
    /// Short title at the head of every page.
    pub running_head: String,
    /// Standing caution or ownership line at the foot of every page.
    pub footer: String,
    pub blocks: Vec<Block>,
}

/// How a stretch of text is set.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Style {
    #[default]
    Regular,
    Strong,
    Emphasis,
}

impl Style {
    pub const ALL: [Self; 3] = [Self::Regular, Self::Strong, Self::Emphasis];
}

/// A stretch of text in one style.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Run {
    pub text: String,
    pub style: Style,
}

/// Text in one or several styles, read without a break.
///
/// A line feed inside a run ends the line; every other run of white space is one space at which a line may break.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Text(pub Vec<Run>);

impl Text {
    /// Appends text in the regular style.
    pub fn plain(self, text: impl Into<String>) -> Self {
        self.with(text.into(), Style::Regular)
    }

    /// Appends text that carries weight.
    pub fn strong(self, text: impl Into<String>) -> Self {
        self.with(text.into(), Style::Strong)
    }

    /// Appends text in italics.
    pub fn emphasis(self, text: impl Into<String>) -> Self {
        self.with(text.into(), Style::Emphasis)
    }

    fn with(mut self, text: String, style: Style) -> Self {
        self.0.push(Run { text, style });
        self
    }

    /// The words without their styles.
    pub fn to_plain(&self) -> String {
        self.0.iter().map(|run| run.text.as_str()).collect()
    }

    /// Whether there is nothing to print.
    pub fn is_empty(&self) -> bool {
        self.0.iter().all(|run| run.text.trim().is_empty())
    }
}

impl From<&str> for Text {
    fn from(text: &str) -> Self {
        Self::default().plain(text)
    }
}

impl From<String> for Text {
    fn from(text: String) -> Self {
        Self::default().plain(text)
    }
}

/// How much a block asks of the reader. Every writer says it with a word; colour only repeats it.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Tone {
    #[default]
    Plain,
    Act,
    Review,
    Note,
    /// Set back: context that may be skipped.
    Quiet,
}

impl Tone {
    /// The word printed with the tone; none for text that asks nothing.
    pub fn word(self) -> Option<&'static str> {
        match self {
            Self::Act => Some("act"),
            Self::Review => Some("review"),
            Self::Note => Some("note"),
            Self::Plain | Self::Quiet => None,
        }
    }
}

/// One piece of a report.
#[derive(Debug, Clone, PartialEq)]
pub enum Block {
    /// Opens the report: the document's title and subject, then label and value of each line.
    TitleBlock(Vec<(String, Text)>),
    /// Level 1 for a section, 2 and 3 below it.
    Heading {
        level: u8,
        text: String,
    },
    Paragraph(Text),
    /// A paragraph in small type: sources, remarks, small print.
    Small(Text),
    Bullets(Vec<Text>),
    /// Label and value, one line each.
    Facts(Vec<(String, Text)>),
    Table(Table),
    /// A boxed message. Its tone's word is printed before the title.
    Notice {
        tone: Tone,
        title: String,
        body: Vec<Text>,
    },
    /// A line to sign for each role, with name, signature and date.
    SignOff(Vec<String>),
    /// A little air.
    Space,
    PageBreak,
    /// Blocks that belong on one page whenever they fit on one.
    KeepTogether(Vec<Block>),
}

/// Where a column's text stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Align {
    #[default]
    Left,
    Right,
    Centre,
}

/// One column of a table.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    pub head: String,
    pub align: Align,
    /// Share of the width that the fitted columns leave; 0 fits the column to its content.
    pub weight: f32,
}

impl Column {
    /// A column as wide as its widest cell, text to the left.
    pub fn fit(head: impl Into<String>) -> Self {
        Self { head: head.into(), align: Align::Left, weight: 0.0 }
    }

    /// A column as wide as its widest cell, numbers to the right.
    pub fn number(head: impl Into<String>) -> Self {
        Self { head: head.into(), align: Align::Right, weight: 0.0 }
    }

    /// A column that takes this share of the width left over, text to the left and wrapped.
    pub fn share(head: impl Into<String>, weight: f32) -> Self {
        Self { head: head.into(), align: Align::Left, weight }
    }
}

/// One row of a table.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Row {
    pub cells: Vec<Text>,
    /// A row of tone act, review or note carries a mark in its colour; the word belongs in one of the cells.
    pub tone: Tone,
}

impl Row {
    /// A row without a tone.
    pub fn plain(cells: Vec<Text>) -> Self {
        Self { cells, tone: Tone::Plain }
    }
}

/// A table with a head that is repeated on every page it reaches.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Table {
    pub caption: Option<String>,
    pub columns: Vec<Column>,
    pub rows: Vec<Row>,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_is_put_together_in_reading_order() {
        let text = Text::from("driven by ").strong("+480 mV").plain(" against ").emphasis("Fe³⁺/Fe²⁺");
        assert_eq!(text.to_plain(), "driven by +480 mV against Fe³⁺/Fe²⁺");
        assert_eq!(text.0[1].style, Style::Strong);
        assert_eq!(text.0[3].style, Style::Emphasis);
    }

    #[test]
    fn white_space_alone_is_empty() {
        assert!(Text::from(" \n").is_empty());
        assert!(!Text::from("0").is_empty());
    }
}
