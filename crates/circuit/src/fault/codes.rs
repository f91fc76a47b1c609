//! The table of codes: what each mistake and remark means, with an example.

/// Every code of this crate: code, title, explanation with an example.
pub const CODES: &[(&str, &str, &str)] = &[
    (
        "P0107",
        "a value needs a unit",
        "Every value carries its unit, so that nobody has to guess one. Write `resistor chest from pad to ground = 50 ohm`, not `= 50`.",
    ),
    (
        "P0150",
        "a value of another unit",
        "The place needs one quantity and the value is another: `capacitor bank from top to ground = 32 mH` gives an inductance where a capacitance belongs. For an expression, follow the units through it: `2 A * 3 ohm` is a voltage.",
    ),
    (
        "P0151",
        "a sum of unlike things",
        "Only like quantities are added or subtracted. A share of a value is a factor: write `100 ohm * (1 + 5 %)`, not `100 ohm + 5 %`.",
    ),
    (
        "P0152",
        "a share is written with % or ppm",
        "Spreads, fractions of the largest value, relative limits and the allowed error are shares, and a bare number could be meant either way. Write `tolerance 5 %`, not `tolerance 0.05`. A let-value carries the sign too: `let tol = 5 %`.",
    ),
    (
        "P0153",
        "unlike things compared",
        "`min` and `max`, and the ordinates of `points`, are of one quantity: `max(1 V, 20 mV)`, not `max(1 V, 20 mA)`.",
    ),
    (
        "P0154",
        "a quantity raised to something computed",
        "The unit of a power has to be known when the file is read, so that a quantity is raised only to written numbers: `(4.8 kV)^2`, `x^(1/2)`; not `(4.8 kV)^n`. A number without a unit is raised to anything.",
    ),
    (
        "P0155",
        "a function of a plain number",
        "`exp`, `ln`, `sin` and their kin take numbers without a unit. Divide by what sets the scale: `exp(-t / 3.9 us)`, not `exp(-t)`.",
    ),
    (
        "P0156",
        "a unit that is not kept",
        "Exponents of units are kept in sixtieths, up to 500. `(1 V)^(1/7)` is beyond that, and so is a power of a thousand.",
    ),
    (
        "P0157",
        "no finite number",
        "The value divides by zero or leaves the range of numbers, as `1 ohm / 0` does; where a case is named, with that case's values.",
    ),
    (
        "P0158",
        "a value out of its range",
        "Resistances, capacitances and inductances are above 0, a coupling factor lies between -1 and 1, times are not below 0: `resistor r from a to b = 0 ohm` is refused, `short circuit` is the word for it. The ends of the value's own spread, and every case, must lie in the range too.",
    ),
    (
        "P0159",
        "a circuit word out of place",
        "`open circuit` and `short circuit` stand as a resistor's whole value, a let-value's, or a case's: `resistor load from out to ground = open circuit`.",
    ),
    (
        "P0160",
        "a let-value that may be a circuit word",
        "A let-value that is `open circuit` or `short circuit`, if only in one case, is no number. It stands alone as a resistor's value: `= load`, not `= 2 * load`.",
    ),
    (
        "P0161",
        "knots that do not ascend",
        "The abscissas of `points` ascend. One may stand twice, for a jump, as in `points(t; 0 s: 0 V; 1 ms: 5 V; 1 ms: 2 V)`; not three times.",
    ),
    (
        "P0162",
        "nested too deep",
        "An expression may be nested 400 deep, each operator of a chain counted. Give a part of it a name with `let` or `signal`.",
    ),
    (
        "P0163",
        "points of a signal",
        "`points` takes `t` or let-values as its argument; a table of a signal is not taken yet. Write `points(t; 0 s: 0 V; 1 ms: 5 V)`.",
    ),
    (
        "P0164",
        "limits of a tolerance that do not ascend",
        "The lower limit stands first: `tolerance -20 % to 50 %`.",
    ),
    (
        "P0165",
        "arguments of a function",
        "`min` and `max` take two or more values, every other function takes one: `max(1 V, v0)`, `sqrt(l / c)`.",
    ),
    (
        "P0250",
        "a name with other characters",
        "A name is an ASCII letter and then letters, digits and `_`; indices such as `n[3]` may follow.",
    ),
    (
        "P0251",
        "a name that the language needs",
        "Let-values, signals, readings, claims and counters stand among words, so that they may not be called as these are: connectives (`from`, `to`, …), the words that begin a phrase (`voltage`, `time`, `final`, …), functions, `t`, `pi`, and units with or without a prefix (`mA`). Nodes and parts may have any name but a connective, and no part is called `ground`.",
    ),
    (
        "P0252",
        "a name given twice",
        "Parts have one name space; let-values, signals, readings and claims share another. The mistake stands at the later name. A claim may share a reading's name only as `claim dose: dose is at most 3 J`.",
    ),
    (
        "P0253",
        "an unknown part",
        "A phrase, a coupling or a schedule names a part that no statement makes, as `energy into rr` where only `r` exists.",
    ),
    (
        "P0254",
        "an unknown node",
        "No part touches a node of this name, as in `voltage at pda` where the node is `pad`.",
    ),
    (
        "P0255",
        "an unknown name",
        "An expression uses a let-value, signal or reading that is not defined, as `= laod` where `let load = 50 ohm` stands.",
    ),
    (
        "P0256",
        "a name that may not stand here",
        "Sources and signals use let-values and signals, let-values use let-values, and only readings and claims use readings: `voltage v from a to ground = dose` cannot use the reading `dose`, which is known only after the shot.",
    ),
    (
        "P0257",
        "definitions in a circle",
        "Nothing may be defined by way of itself: `let a = b * 2` and `let b = a / 2` say nothing. The mistake stands at the circle's first member. Switches may not be ganged in a circle either.",
    ),
    (
        "P0258",
        "a let-value set to a circuit word from outside",
        "`load = open circuit` can be set only where `load` stands as a resistor's whole value and nowhere as a number.",
    ),
    (
        "P0350",
        "a part of another kind",
        "The phrase is of another kind of part: `charge held by` is of a capacitor, `flux held by` of an inductor, `closing of` of a switch, `conducting of` of a diode; `coupling … between` joins inductors.",
    ),
    (
        "P0351",
        "voltage across a changeover",
        "A changeover has three ends and no one voltage across it. Name the nodes: `voltage from top to pad`, or `voltage at top`.",
    ),
    (
        "P0352",
        "time where nothing runs",
        "`t` stands in sources and signals. A part's value, a let-value and a reading are the same all through a shot; for a signal at an instant write `drive at 1 ms`.",
    ),
    (
        "P0353",
        "a signal out of place",
        "Let-values and parts' values are numbers before the shot begins; they cannot use `voltage at pad`.",
    ),
    (
        "P0354",
        "a reading out of place",
        "A reading, as `highest voltage at pad`, is known only after the shot, so that sources, schedules and let-values cannot use it.",
    ),
    (
        "P0355",
        "an edge out of place",
        "An edge, as `closing of fire`, is an instant of the shot. Readings and delays use edges; sources and let-values do not.",
    ),
    (
        "P0356",
        "a bare signal as a reading",
        "A reading is one number from one shot, and a signal has a value at every instant. Say which: `final voltage at pad`, `highest voltage at pad`, `voltage at pad at 1 ms`.",
    ),
    (
        "P0357",
        "a constant as a signal",
        "The phrase measures something that changes. A constant is a signal only by its name: `signal flat = 5 V`, then `highest flat`.",
    ),
    (
        "P0358",
        "an inductor coupled to itself",
        "`coupling core between primary and primary` joins one inductor; two are needed.",
    ),
    (
        "P0359",
        "a pair coupled twice",
        "Two inductors have one coupling factor. Leave one of the two `coupling` statements out.",
    ),
    (
        "P0360",
        "couplings that contradict each other",
        "Windings that are close to one another are close to each other's neighbours. With factors of `0.95`, `0.95` and `-0.95` among three windings the stored energy could be negative, which no coils can do.",
    ),
    (
        "P0361",
        "a node that is none of a changeover's",
        "A changeover starts at, moves to and rests at one of its two nodes: `changeover relay from top to charger or pad : at charger, moves to pad at 1 us`.",
    ),
    (
        "P0362",
        "a changeover between a node and itself",
        "The two contacts are on different nodes: `from top to charger or pad`.",
    ),
    (
        "P0363",
        "a source that is not linear in its signals",
        "A controlled source is a constant times signals, plus what depends on time alone: `10 * voltage at sense`. Products, powers and functions of signals, power and energy, and factors that change with `t` are not taken.",
    ),
    (
        "P0364",
        "a time outside the span",
        "A written time lies between 0 s and the span; `highest voltage at pad after 40 ms` with `span 30 ms` could never be read. A computed time outside makes the reading absent instead.",
    ),
    (
        "P0365",
        "a window that ends before it starts",
        "The second time of `between T1 and T2` is after the first.",
    ),
    (
        "P0366",
        "a duration without a window",
        "`duration` is the length of a window, which must be written: `duration while fire is closed`.",
    ),
    (
        "P0367",
        "a window on an instant",
        "`final …`, `… at T`, `… just before T` and `energy stored at T` are taken at one instant and take no window; `final voltage at pad after 1 ms` is refused.",
    ),
    (
        "P0368",
        "phase 0",
        "Phases are counted from 1: `during phase 1 of voltage across chest`.",
    ),
    (
        "P0369",
        "fractions in the wrong order",
        "A rise and a front go from a lower to a higher fraction, a fall from a higher to a lower: `rise of voltage across c from 10 % to 90 %`.",
    ),
    (
        "P0370",
        "a definition that grows too large",
        "With the signals that it uses in place, a signal may have 100,000 terms and be nested 400 deep; readings may follow one another 400 deep. Name the parts of `signal s` differently, so that fewer stand within each other.",
    ),
    (
        "P0371",
        "a circuit word asked of another quantity",
        "Only a resistance can be `open circuit` or `short circuit`; `when bank_v is open circuit` is never true.",
    ),
    (
        "P0372",
        "a qualifier that follows nothing",
        "In Rust, a qualifier belongs to the part or the claim just before it: `.capacitor(…).charged_to(volts(5e3))`.",
    ),
    (
        "P0450",
        "instants that do not rise",
        "The stated instants of a schedule rise strictly in the order written: `open, closes at 1 ms, opens at 2 ms`.",
    ),
    (
        "P0451",
        "two instants for one action",
        "Of several instants the first would always act, so that an action takes one `at` among its triggers: `opens when voltage across bank falls below 0.7 kV or at 11 ms`.",
    ),
    (
        "P0452",
        "an action of another kind of part",
        "A switch `closes` and `opens`, a changeover `moves to` a node.",
    ),
    (
        "P0453",
        "an action that nothing sets off",
        "An action has at least one trigger: `closes at 1 us`.",
    ),
    (
        "P0550",
        "no span",
        "How long the shot is followed has to be stated: `span 30 ms`.",
    ),
    (
        "P0551",
        "limits that do not ascend",
        "`between X and Y` has the lower limit first: `between 10 J and 20 J`.",
    ),
    (
        "P0552",
        "an amount of a reading without a unit",
        "For a reading that is itself a share, `within 2` or a computed amount could be a share of the target or points. Write `within 2 percentage points of 5 %`, or `within 15 % of 5 %` for a share of it.",
    ),
    (
        "P0553",
        "percentage points of a quantity",
        "Percentage points are for readings without a unit. For a quantity write an amount, `within 3 J of 300 J`, or a share, `within 1 % of 300 J`.",
    ),
    (
        "P0554",
        "too much after within",
        "`within` takes one share, one amount, or both joined by `or` (the greater counts): `within 15 % or 3 J of 300 J`.",
    ),
    (
        "P0555",
        "a let-value varied twice",
        "One `cases` statement varies a let-value; put all its values into one: `cases load = 25 ohm, 50 ohm`.",
    ),
    (
        "P0556",
        "a range without values",
        "A range has one value or more, and one only where its ends are equal: `cases load = 25 ohm to 175 ohm, 7 values`.",
    ),
    (
        "P0557",
        "a case with too few or too many values",
        "Where several let-values move together, each case gives each of them a value: `cases (rated_j, bank_v) = (150 J, 3.4 kV), (200 J, 3.9 kV)`.",
    ),
    (
        "P0558",
        "an equal ratio through zero",
        "Values by equal ratio need ends of one sign that are not 0: `cases load = 1 ohm to 1 kohm, 4 values by equal ratio`.",
    ),
    (
        "P0559",
        "too many cases",
        "Every combination of the `cases` statements is run, and together they may make 1,000,000. Give fewer values, or let some move together.",
    ),
    (
        "P0560",
        "a case that uses what is varied elsewhere",
        "A case's value is taken with the let-values as written, so that one which uses another varied let-value would not mean what it says. Let them move together: `cases (a, b) = (1 V, 2 V), (3 V, 6 V)`.",
    ),
    (
        "P0561",
        "a limit of nothing",
        "A limit is 1 or more: `limit steps 10_000_000`.",
    ),
    (
        "P0562",
        "more parts than the limit",
        "A file that makes millions of parts is more often a slip in a `repeat` than meant. Raise the limit where it is meant: `limit parts 10_000_000`.",
    ),
    (
        "P0563",
        "an adjusted let-value that is set too",
        "What `adjust` solves for cannot be varied by `cases` or held by `--set` as well. Take the `adjust` out, or vary what the reading is to reach: `cases rated_j = 150 J, 200 J`.",
    ),
    (
        "P0564",
        "ends of an adjustment that do not ascend",
        "A let-value is adjusted from a lower end to a higher one: `adjust bank_v from 1 kV to 6 kV so that energy into chest is rated_j`.",
    ),
    (
        "P0701",
        "no ground",
        "Voltages are against the reference node, which is called `ground`; at least one part must touch it. A circuit that floats is joined to it by what it floats on, or at any one node.",
    ),
    (
        "R0350",
        "a window on one phrase of a sum",
        "A window belongs to the one phrase before it. In `energy into a + energy into b after 1 ms` only the second term is after 1 ms; write the window on both if that is meant.",
    ),
    (
        "R0450",
        "an instant past the span",
        "The schedule states an instant after the end of the `span`, so that the action never comes.",
    ),
    (
        "R0701",
        "both ends on one node",
        "The part is joined to itself, as `resistor r from a to a = 1 ohm`: no voltage can stand across it. Perhaps one of the two nodes is a slip.",
    ),
    (
        "R0702",
        "a node that one part only touches",
        "No current can flow through a part that ends on a node of its own. Perhaps the node's name is a slip, as `pda` for `pad`.",
    ),
];
