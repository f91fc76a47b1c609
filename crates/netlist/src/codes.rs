//! The codes of this crate's mistakes, for `manual P0103`: code, title, explanation with an
//! example. A code never changes its meaning.

/// Every code of this crate: code, title, explanation with an example.
pub const CODES: &[(&str, &str, &str)] = &[
    (
        "P0001",
        "the text is too long",
        "A netlist has at most 256 MB of text. Write what repeats with `repeat`:\n\n    repeat k from 1 to 40\n      capacitor c[k] from n[k] to ground = 1 nF\n    end",
    ),
    (
        "P0002",
        "a byte that is no UTF-8",
        "Netlists are UTF-8 text. A file in another encoding is converted by the editor that wrote it; a stray byte is deleted.",
    ),
    (
        "P0003",
        "a control character",
        "Only the tab and the end of a line may stand in a netlist, also in comments and quotes. Characters that turn the direction of text about are refused too, since they can hide what a line says.",
    ),
    (
        "P0004",
        "a sign of typography",
        "Word processors change plain signs: `−` for `-`, `×` for `*`, curly for straight quotes. Write the plain sign:\n\n    let half = bank_v * 0.5",
    ),
    (
        "P0005",
        "a character that the language does not have",
        "Outside quotes and comments a netlist has words, numbers, units and the signs `+ - * / ^ = < > : ; , . % ² ( ) [ ] \"`.",
    ),
    (
        "P0006",
        "a quote that is not closed",
        "A text in quotes ends on the line it starts on; `\"\"` within it is a quote:\n\n    title \"The \"\"old\"\" stage\"",
    ),
    (
        "P0007",
        "too many wrong characters",
        "After ten thousand wrong characters the rest of the text is left unread: it is probably no netlist.",
    ),
    (
        "P0101",
        "a number in a form that is not read",
        "Digits stand on both sides of the point, and `_` only between digits: `0.5`, `5`, `10_000`, not `.5`, `5.`, `5_`.",
    ),
    (
        "P0102",
        "a comma between two digits",
        "A decimal sign is a point, and a list has a blank after its comma, so that `0,5` cannot mean two things: write `0.5`, or `0, 5`.",
    ),
    (
        "P0103",
        "an unknown unit",
        "The units are `V A ohm Ω S F H s Hz J W C Wb rad deg % ppm` with the prefixes `f p n u µ m k M G T`, where case counts:\n\n    resistor path from a to ground = 4.7 kohm",
    ),
    (
        "P0104",
        "a unit without a number",
        "A unit stands only after a number, or after a unit and `*` or `/`. Let-values carry their unit with them: write `load`, not `load ohm`, and `x * 1 ohm` to give a plain number one.",
    ),
    (
        "P0105",
        "a power after a unit",
        "`4.8 kV^2` may mean the square of the value or a square unit. Write `(4.8 kV)^2` for the value; `²` is the only power of a unit, as in `A²*s`:\n\n    let held = 0.5 * 32 uF * (4.8 kV)^2",
    ),
    (
        "P0106",
        "a fraction before a unit",
        "`1/2 ohm` may mean half an ohm or one over two ohms. Write `(1/2) * 1 ohm` or `1/(2 ohm)`.",
    ),
    (
        "P0108",
        "more than one unit after `/`",
        "After `/` comes one unit or a bracket of units: `J/(ohm*s)`, not `J/ohm*s`.",
    ),
    (
        "P0109",
        "a share added to a quantity",
        "`100 ohm + 5 %` adds a number to a resistance. Five percent more is\n\n    let more = 100 ohm * (1 + 5 %)",
    ),
    (
        "P0110",
        "a number too large or too small to hold",
        "Numbers lie between about 5e-324 and 1.8e308 in coherent SI units.",
    ),
    (
        "P0111",
        "a unit of too high a power",
        "The powers of volt, ampere and second in a unit go up to 500.",
    ),
    (
        "P0201",
        "no name",
        "A name is an ASCII letter and then letters, digits and `_`, with indices where it has them: `bank`, `v_out`, `n[3]`.",
    ),
    (
        "P0202",
        "a blank before an index",
        "An index stands right after its name: `n[3]`, not `n [3]`.",
    ),
    (
        "P0203",
        "an index below 0",
        "Indices are 0 or more. In a `repeat` the first round may ask for `n[k-2]` with `k` at 1: begin it later, or count on from another number.",
    ),
    (
        "P0204",
        "a count that is no whole number",
        "Bounds and indices are whole numbers, made of digits, counters and let-values that are whole numbers:\n\n    let sections = 40\n    repeat k from 1 to sections\n      capacitor c[k] from n[k] to ground = 1 nF\n    end",
    ),
    (
        "P0205",
        "a count past all measure",
        "Whole-number arithmetic goes up to 9223372036854775807.",
    ),
    (
        "P0206",
        "a sign that bounds and indices do not have",
        "Bounds and indices have whole numbers, counters, let-values, brackets and `+ - *`.",
    ),
    (
        "P0301",
        "a statement that goes on",
        "A statement goes on to the next line after a comma, after `+ - * / ^ = :` and inside an open bracket. Here the next line begins another statement, or the text ends: close the bracket, or delete the comma.",
    ),
    (
        "P0302",
        "no statement begins so",
        "The first word of a line says what it states: a part (`resistor`, `capacitor`, `inductor`, `coupling`, `wire`, `voltage`, `current`, `switch`, `changeover`, `diode`), or `title`, `note`, `let`, `signal`, `reading`, `claim`, `cases`, `adjust`, `span`, `start`, `integrate`, `error`, `time step`, `channels`, `limit`, `repeat`, `end`.",
    ),
    (
        "P0303",
        "something else was expected",
        "The statement was read up to the place underlined; the message says what it needs there.",
    ),
    (
        "P0304",
        "a qualifier that stands twice",
        "A qualifier stands at most once in a statement, and a value has one spread.",
    ),
    (
        "P0305",
        "a word of a later version",
        "The word is known, and what it stands for does not work in this version yet.",
    ),
    (
        "P0306",
        "nested too deep",
        "Brackets, phrases and `repeat` nest up to 64 deep; `limit nesting 128` raises it, up to 256.",
    ),
    (
        "P0307",
        "an expression of too many operations",
        "An expression has at most 400 operations one within or after the other. Name parts of it with `let`, `signal` or `reading`.",
    ),
    (
        "P0308",
        "a sum as a signal, without brackets",
        "A phrase takes one signal; an expression of signals stands in brackets:\n\n    reading rest = area of (voltage across bank - 60 V)",
    ),
    (
        "P0309",
        "a bracket that nothing has opened",
        "Delete it, or open it where the group begins.",
    ),
    (
        "P0310",
        "an unknown qualifier",
        "Each part has qualifiers of its own; the label names them.",
    ),
    (
        "P0311",
        "a wrong number of arguments",
        "`min` and `max` take two or more arguments, every other function one.",
    ),
    (
        "P0312",
        "a statement that may stand once",
        "`title` and the statements of the run (`span`, `start`, `integrate`, `error`, `time step`, `channels`, `limit` of one kind) stand once in a file.",
    ),
    (
        "P0313",
        "a rating of another kind",
        "A part is `rated` by what it stands, and which it is its unit says: `rated 6 kV, 200 A, 5 W, 20 J, 3 A²*s`. What is none of these is stated as a claim.",
    ),
    (
        "P0501",
        "an unknown limit",
        "`limit` raises `steps`, `events`, `unknowns`, `parts` or `nesting`:\n\n    limit steps 20_000_000",
    ),
    (
        "P0502",
        "a count out of its range",
        "The count is a whole number written with digits; the message says from where to where.",
    ),
    (
        "P0503",
        "two allowances of one kind",
        "`within 15 % or 3 J of 300 J` has a share and an amount, in either order; the greater holds.",
    ),
    (
        "P0601",
        "a `repeat` without its `end`",
        "Every `repeat` is closed by a line `end`.",
    ),
    (
        "P0602",
        "an `end` that ends nothing",
        "Delete it, or look for the `repeat` that it was to close.",
    ),
    (
        "P0603",
        "a statement that cannot be repeated",
        "A `repeat` holds parts, couplings, signals, readings, claims, channels and `repeat`; what is stated once stands outside.",
    ),
    (
        "P0604",
        "too many parts",
        "The repetitions would make more parts and other statements than `limit parts` allows (5_000_000 by default).",
    ),
    (
        "P0605",
        "a counter with a kept name",
        "A counter may not be called by a connective, a word that begins phrases, a function, `t`, `pi` or a unit: write `k` or `i`.",
    ),
    (
        "P0606",
        "a counter's name given twice",
        "Counters share their names with let-values, signals, readings and claims; two counters may share one only beside each other, not one inside the other.",
    ),
    (
        "P0607",
        "a count that `cases` or `adjust` would vary",
        "A let-value that sets bounds or indices decides which parts there are, and is the same in all cases.",
    ),
    (
        "P0608",
        "a count in a circle",
        "A let-value that sets a bound or an index is worked out from itself.",
    ),
];

#[cfg(test)]
mod tests {
    use super::CODES;

    #[test]
    fn codes_ascend() {
        assert!(CODES.is_sorted_by(|a, b| a.0 < b.0));
    }
}
