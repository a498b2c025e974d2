"""Random valid projects of format 1, as text: one seed, one text.

A project is drawn in one of two number styles. `exact`: stresses, magnitudes and combination factors are short binary
fractions, so that sums are exact in any order and loads may cancel, cases repeat and stresses vanish without a verdict
hanging on the last bit. `decimal`: four significant digits, as people type them; there nothing cancels but the
magnitudes that the 1e-12 rule makes zero.
"""

from __future__ import annotations

import json
import re
from dataclasses import dataclass, field
from random import Random
from typing import Any

Table = dict[str, Any]

THEORIES = ("tresca", "von-mises")
ORDER = ("xx", "yy", "zz", "xy", "yz", "zx")
BLOCKING = ("elongation", "hydrostatic-tension", "temperature", "factor-below-one")
KINDS = ("category", "material", "load", "case", "point", "acknowledge")
NAMES = ["{p}{i:02d}", "{p} {i}", "{p}.{i}", "{p}-{i}_b", "{i}", "Kräfte {i}", "荷重{i}", "{p}'{i}", '"{p}" {i}']
NAMES += ["[{p}] #{i}", "{p} = {i}, {p}", "{p}\\{i}", "{p}.{i}.x y"]


@dataclass(frozen=True)
class Units:
    """What numbers look like in one unit system."""

    force: str
    """Unit of force."""
    stress: str
    """Unit of stress."""
    temperature: str
    """Unit of temperature."""
    strengths: tuple[float, ...]
    """Usual yield strengths."""
    step: float
    """A short binary fraction near a hundredth of a usual strength's size or less: exact stresses are multiples."""


UNITS = {
    "mm-N-MPa": Units("N", "MPa", "degC", (210.0, 225.0, 240.0, 275.0, 300.0, 345.0), 0.5),
    "m-N-Pa": Units("N", "Pa", "degC", (210e6, 225e6, 240e6, 275e6, 300e6, 345e6), 500e3),
    "in-lbf-psi": Units("lbf", "psi", "degF", (30000.0, 36000.0, 40000.0, 50000.0), 64.0),
    "in-kip-ksi": Units("kip", "ksi", "degF", (30.0, 36.0, 40.0, 50.0), 0.125),
}


def random_project(seed: int) -> str:
    """A small valid project without sections and reversible loads, in a random spelling."""
    rng = Random(seed)
    return Writer(rng).text(Maker(rng).project())


@dataclass
class Maker:
    """Draws the contents of one project."""

    rng: Random
    """The only source of chance."""
    made: Table = field(default_factory=dict)
    """What is drawn so far, in the shape of the file."""
    scales: dict[str, float] = field(default_factory=dict)
    """Usual magnitude of each load."""

    def chance(self, share: float) -> bool:
        """True in this share of draws."""
        return self.rng.random() < share

    def project(self) -> Table:
        """A whole project."""
        rng = self.rng
        system = rng.choice(list(UNITS))
        self.units = UNITS[system]
        self.exact = self.chance(0.5)
        self.tidy = self.chance(0.4)  # few stresses are missing
        self.order = rng.sample(ORDER, 6) if self.chance(0.6) else list(ORDER)
        self.thin = rng.choice([0.0, 0.05, 0.1, 0.1, 0.25])
        self.temperatures = [] if self.chance(0.3) else [20.0, 60.0, 150.0, rng.choice([-40.0, 100.0, 425.5])]
        self.sizes = rng.choice([0.35, 0.5, 0.7, 1.0])
        self.made = {"format": 1, "project": self.settings(system)}
        self.made["category"] = [self.category(i) for i in range(rng.randint(1, 3))]
        self.made["material"] = [self.material(i) for i in range(rng.randint(1, 4))]
        self.made["load"] = [self.load(i) for i in range(rng.choice([0, 1, 2, 3, 4, 6]))]
        self.made["case"] = []
        self.cases()
        self.made["point"] = [self.point(i) for i in range(0 if self.chance(0.02) else rng.randint(1, 7))]
        self.made["acknowledge"] = self.acknowledgements()
        return self.made

    def settings(self, system: str) -> Table:
        """The [project] table."""
        title = self.rng.choice(["Slipway winch", "Kran 7, Stütze", 'The "old" bracket', "Wellenzapfen #3"])
        table: Table = {"title": title, "revision": self.rng.choice(["A", "B.2", "0"]), "units": system}
        table["components"] = " ".join(self.order)
        table["accept"] = self.rng.choice(["both", "both", *THEORIES])
        table["thin"] = self.thin
        if self.chance(0.5):
            long = 'two\nlines, with "quotes"\n[[case]]\nname = 1'
            table["notes"] = self.rng.choice(["", "one line # no comment", long])
        return table

    def name(self, kind: str, i: int) -> str:
        """A name of an entry: mostly plain, now and then one that must be quoted."""
        pattern = self.rng.choice(NAMES) if self.chance(0.3) else NAMES[0]
        taken = {entry["name"] for entry in self.made.get(kind, [])}
        name = pattern.format(p=kind[0].upper(), i=i + 1)
        return name if name not in taken else f"{kind} {i + 1}"

    def pick(self, kind: str) -> str:
        """The name of some entry of a kind."""
        name: str = self.rng.choice(self.made[kind])["name"]
        return name

    def optional(self, table: Table, key: str, value: Any, share: float) -> None:
        """Gives a table a key in this share of draws."""
        if self.chance(share):
            table[key] = value

    # Categories and materials

    def factors(self, low: float) -> float | Table:
        """Required factors: one number, or one for each theory."""
        usual = [low, low * 1.25, low * 1.5]
        first = self.rng.choice(usual) if self.chance(0.95) else 0.875
        if self.chance(0.4):
            return first
        return {"tresca": first, "von-mises": first if self.chance(0.5) else self.rng.choice([*usual, low * 1.15])}

    def category(self, i: int) -> Table:
        """A category, with or without factors on ultimate."""
        table: Table = {"name": self.name("category", i)}
        self.optional(table, "label", "Normal operation, x < 3", 0.5)
        table["loads"] = self.rng.choice(["characteristic", "design"])
        table["yield"] = self.factors(1.0)
        self.optional(table, "ultimate", self.factors(1.25), 0.5)
        return table

    def material(self, i: int) -> Table:
        """A material: plain, with a range, with tables, with a measured shear yield."""
        strength = self.rng.choice(self.units.strengths)
        table: Table = {"name": self.name("material", i), "yield": strength}
        self.optional(table, "ultimate", self.rng.choice([1.25, 1.4, 1.75]) * strength, 0.8)
        self.optional(table, "shear-yield", self.rng.choice([0.45, 0.5, 0.55, 0.625]) * strength, 0.25)
        self.optional(table, "elongation", self.rng.choice([0.02, 0.05, 0.12, 0.2, 0.25]), 0.6)
        self.optional(table, "range", self.rng.choice([[-20, 80], [-20.0, 150.0], [15, 20], [-50.0, 500.0]]), 0.5)
        self.optional(table, "yield-at", self.strengths_at(strength), 0.35)
        if "ultimate" in table:
            self.optional(table, "ultimate-at", self.strengths_at(table["ultimate"]), 0.2)
        self.optional(table, "source", "invented: table 3, row 2", 0.7)
        return table

    def strengths_at(self, strength: float) -> list[list[float]]:
        """A table of strength by temperature."""
        usual: list[list[float]] = [[20.0, 150.0], [20.0, 60.0, 100.0, 200.0], [-50.0, 20.0, 300.0, 425.5], [60, 100]]
        stops = self.rng.choice(usual)
        return [[stop, strength * (1 - 0.0625 * place)] for place, stop in enumerate(stops)]

    # Loads and cases

    def load(self, i: int) -> Table:
        """A load, with or without a unit and a label."""
        table: Table = {"name": self.name("load", i)}
        self.optional(table, "label", "Rope pull", 0.4)
        units = ["", self.units.force, self.units.stress, self.units.temperature]
        self.optional(table, "unit", self.rng.choice(units), 0.6)
        self.optional(table, "sense", "fixed", 0.3)
        usual = [1.0, 64.0, 1024.0] if self.exact else [1.0, 50.0, 1200.0, 60000.0]
        self.scales[table["name"]] = self.rng.choice(usual)
        return table

    def digits(self, value: float) -> float:
        """The value as somebody would type it."""
        return float(f"{value:.4g}")

    def sign(self) -> int:
        """1 or -1."""
        return self.rng.choice([1, -1])

    def magnitude(self, load: str) -> float:
        """How large a load is in a case; now and then written as zero."""
        if self.chance(0.08):
            return 0.0
        if self.exact:
            return self.sign() * self.rng.randint(1, 6) / 4 * self.scales[load]
        return self.digits(self.sign() * self.rng.uniform(0.2, 1.5) * self.scales[load])

    def cases(self) -> None:
        """All cases: basic ones, repeated ones, combinations of any depth, and pairs that cancel."""
        for _ in range(0 if self.chance(0.02) else self.rng.randint(1, 5)):
            self.add_case(self.basic())
        for _ in range(self.rng.choice([0, 0, 1, 2])):
            if self.made["case"]:
                self.add_case(self.repeated())
        for _ in range(self.rng.choice([0, 0, 1, 2, 4])):
            if self.made["case"]:
                self.add_case(self.combination())
        if self.made["case"] and self.made["load"] and self.chance(0.3):
            self.cancelling()
        if self.chance(0.3):
            self.rng.shuffle(self.made["case"])

    def add_case(self, rest: Table) -> str:
        """Appends a case under a new name, which is returned."""
        case = {"name": self.name("case", len(self.made["case"]))}
        self.optional(case, "label", "Full haul, level", 0.3)
        self.made["case"].append({**case, **rest})
        return case["name"]

    def basic(self) -> Table:
        """A case of loads only."""
        loads = self.rng.sample(self.made["load"], self.rng.randint(0, len(self.made["load"])))
        case: Table = {"category": self.pick("category")}
        if loads or self.chance(0.3):
            case["loads"] = {load["name"]: self.magnitude(load["name"]) for load in loads}
        if self.temperatures:
            self.optional(case, "temperature", self.rng.choice(self.temperatures), 0.7)
        self.optional(case, "check", self.chance(0.3), 0.3)
        return case

    def repeated(self) -> Table:
        """A case that says the same as an earlier one, so that their margins are equal on linear points."""
        earlier = self.rng.choice(self.made["case"])
        return {key: value for key, value in earlier.items() if key not in ("name", "label", "check")}

    def combination(self) -> Table:
        """A case that adds others, now and then with loads of its own."""
        parts = self.rng.sample(self.made["case"], min(self.rng.randint(1, 3), len(self.made["case"])))
        factors = [1.0, 0.5, 1.5, -1.0, 2.0, 0.25] if self.exact else [1.0, 1.1, 1.35, 0.9, 0.2]
        case: Table = {"category": self.pick("category")}
        case["combine"] = {part["name"]: self.rng.choice(factors) for part in parts}
        if self.made["load"] and self.chance(0.1 if self.tidy else 0.25):
            load = self.pick("load")
            case["loads"] = {load: self.magnitude(load)}
        if any(self.has_temperature(part) for part in parts) or (self.temperatures and self.chance(0.3)):
            case["temperature"] = self.rng.choice(self.temperatures)
        self.optional(case, "check", self.chance(0.6), 0.2)
        return case

    def has_temperature(self, case: Table) -> bool:
        """Whether a case or an ingredient of it at any depth has a temperature."""
        parts = [part for part in self.made["case"] if part["name"] in case.get("combine", {})]
        return "temperature" in case or any(self.has_temperature(part) for part in parts)

    def cancelling(self) -> None:
        """Two ingredients and their sum, in which a load vanishes; exactly only if 3 x 0.1 were 0.3."""
        load, category = self.pick("load"), self.pick("category")
        small, large, factor = (0.25, 0.5, 2.0) if self.exact else (0.1, 0.3, 3.0)
        scale = self.scales[load]
        first = self.add_case({"category": category, "check": False, "loads": {load: small * scale}})
        second = self.add_case({"category": category, "check": False, "loads": {load: large * scale}})
        self.add_case({"category": category, "combine": {first: factor, second: -1.0}})

    # Stresses and points

    def stress_value(self, size: float) -> float:
        """One component, at most about this size and never next to nothing."""
        if self.exact:
            most = max(int(size / self.units.step), 8)
            return self.sign() * self.rng.randint(most // 8, most) * self.units.step
        return self.digits(self.sign() * self.rng.uniform(0.1, 1.0) * size)

    def state(self, size: float) -> list[float]:
        """A stress state in the order xx yy zz xy yz zx."""
        a, b, c, d, e, f = (self.stress_value(size) for _ in range(6))
        tension = 4 * abs(a)
        apart = 0.0 if self.exact and self.chance(0.5) else b
        states = [[0.0, a, 0.0, 0.0, 0.0, 0.0], [0.0, 0.0, 0.0, 0.0, a / 2, 0.0], [a, b, 0.0, d / 2, 0.0, 0.0]]
        states += [[a, a, 0.0, 0.0, 0.0, 0.0], [a, 0.0, 0.0, 0.0, 0.0, d / 2], [a, b, c, d / 2, e / 2, f / 2]]
        states += [[tension, tension, tension + apart, 0.0, 0.0, 0.0], [0.0] * 6]
        return list(self.rng.choices(states, [3, 2, 4, 2, 3, 4, 0.7, 0.7])[0])

    def row(self, state: list[float]) -> list[float]:
        """A state in the order of the file."""
        values = dict(zip(ORDER, state, strict=True))
        return [values[name] for name in self.order]

    def point(self, i: int) -> Table:
        """A point: linear, or with direct rows only."""
        table: Table = {"name": self.name("point", i)}
        self.optional(table, "label", "Shoulder fillet", 0.3)
        self.optional(table, "part", self.rng.choice(["drum shaft", "bed"]), 0.4)
        table["material"] = self.pick("material")
        self.optional(table, "factor", self.own_factor(), 0.4)
        self.optional(table, "source", "run 12, node 4711", 0.7)
        self.own_temperature(table)
        if self.made["load"] and self.chance(0.55):
            self.linear(table)
        else:
            self.direct(table)
        return table

    def own_factor(self) -> float | Table:
        """A point factor: one number, or one for each limit."""
        usual = [1.0, 1.25, 1.15, 0.75]
        if self.chance(0.5):
            return self.rng.choices(usual, [3, 4, 3, 0.5])[0]
        return {limit: self.rng.choices(usual, [3, 4, 3, 0.5])[0] for limit in ("yield", "ultimate")}

    def own_temperature(self, point: Table) -> None:
        """A point's own temperature: one, or by case."""
        if not self.temperatures or not self.made["case"] or self.chance(0.6):
            return
        if self.chance(0.5):
            point["temperature"] = self.rng.choice(self.temperatures)
        else:
            names = {self.pick("case") for _ in range(2)}
            point["temperature"] = {name: self.rng.choice(self.temperatures) for name in sorted(names)}

    def linear(self, point: Table) -> None:
        """Unit-load rows for some loads, and what becomes of the others."""
        names = [load["name"] for load in self.made["load"]]
        felt = self.rng.sample(names, self.rng.randint(1, len(names)))
        size = self.sizes * self.usual_strength(point) / 2
        point["per-load"] = {name: self.unit_row(size, name) for name in felt}
        others = [name for name in names if name not in felt]
        if self.tidy or self.chance(0.3):
            point["not-felt"] = "rest"
        elif others and self.chance(0.8):
            point["not-felt"] = others if self.chance(0.7) else others[1:]
        elif self.chance(0.3):
            point["not-felt"] = []
        if self.chance(0.35):
            point["stress"] = self.rows(0.4, size)

    def unit_row(self, size: float, load: str) -> list[float]:
        """Stress per unit of a load."""
        values = [value / self.scales[load] for value in self.row(self.state(size))]
        return values if self.exact else [self.digits(value) for value in values]

    def usual_strength(self, point: Table) -> float:
        """The plain yield strength of a point's material."""
        strength: float = self.material_of(point)["yield"]
        return strength

    def material_of(self, point: Table) -> Table:
        """The material of a point."""
        return next(entry for entry in self.made["material"] if entry["name"] == point["material"])

    def rows(self, share: float, size: float) -> Table:
        """Direct rows for a share of the cases; combinations seldom have their own."""
        rows: Table = {}
        for case in self.made["case"]:
            if self.chance(share if "combine" not in case else 0.3 * share):
                rows[case["name"]] = self.row(self.state(size))
        return rows

    def direct(self, point: Table) -> None:
        """Direct rows, among them repeated ones, turned ones and one that makes a margin zero or just `thin`."""
        share = 1.0 if self.tidy else self.rng.choice([1.0, 1.0, 0.9, 0.5])
        rows = self.rows(share, self.sizes * self.usual_strength(point))
        names = list(rows)
        if len(names) > 1 and self.chance(0.35):
            source, target = self.rng.sample(names, 2)
            rows[target] = [-value for value in rows[source]] if self.exact else list(rows[source])
        if names and self.chance(0.3):
            self.on_the_line(point, self.rng.choice(names), rows)
        point["stress"] = rows
        if not rows and self.chance(0.5):
            del point["stress"]
        self.optional(point, "per-load", {}, 0.1)
        if self.made["load"]:
            self.optional(point, "not-felt", [self.pick("load")], 0.1)

    def on_the_line(self, point: Table, name: str, rows: Table) -> None:
        """Tension that gives a margin of exactly zero, or exactly `thin`, at the plain yield strength."""
        case = next(entry for entry in self.made["case"] if entry["name"] == name)
        category = next(entry for entry in self.made["category"] if entry["name"] == case["category"])
        own, needed = point.get("factor", 1.0), category["yield"]
        factor = own["yield"] if isinstance(own, dict) else own
        factor *= needed["von-mises"] if isinstance(needed, dict) else needed
        stress = self.usual_strength(point) / (factor * (1 + self.rng.choice([0.0, self.thin])))
        if not self.exact or (8 * stress / self.units.step).is_integer():
            rows[name] = self.row([stress, 0.0, 0.0, 0.0, 0.0, 0.0])

    def acknowledgements(self) -> list[Table]:
        """Blocking cautions taken on by a person, of all points or of some."""
        everything = [(point["name"], name) for point in self.made["point"] for name in BLOCKING]
        share = self.rng.choice([0.0, 0.3, 1.0])
        taken = [pair for pair in everything if self.chance(share)]
        signed = {"by": "N. N.", "reason": "seen, and borne by test 4"}
        return [{"point": point, "caution": name, **signed} for point, name in taken]


@dataclass(frozen=True)
class Writer:
    """Spells a project as TOML, in one of the many ways that mean the same."""

    rng: Random
    """The only source of chance."""

    def text(self, project: Table) -> str:
        """The whole file."""
        comments = self.rng.choice([0.0, 0.1, 0.3])
        lines = ["# An invented project", "", f"format = {project['format']}"] if comments else ["format = 1"]
        blocks = {kind: [self.block(kind, entry, comments) for entry in project[kind]] for kind in KINDS}
        if project["load"] and self.rng.random() < 0.05:
            blocks["load"] = []
            lines += [f"load = [{', '.join(self.inline(entry) for entry in project['load'])}]"]
        ordered = [self.block("project", project["project"], comments), *self.merged(blocks)]
        gap = self.rng.choice(["\n", "\n\n"])
        text = "\n".join(lines) + "\n" + gap + gap.join(ordered)
        return text.replace("\n", "\r\n") if self.rng.random() < 0.04 else text

    def merged(self, blocks: dict[str, list[str]]) -> list[str]:
        """All blocks: kind after kind, or kinds mixed, each kind in its own order."""
        if self.rng.random() < 0.7:
            return [block for kind in KINDS for block in blocks[kind]]
        slots = [kind for kind in KINDS for _ in blocks[kind]]
        self.rng.shuffle(slots)
        queues = {kind: iter(blocks[kind]) for kind in KINDS}
        return [next(queues[kind]) for kind in slots]

    def block(self, kind: str, entry: Table, comments: float) -> str:
        """One entry with its sub-tables, ends in a line break."""
        keys = list(entry)
        if self.rng.random() < 0.15:
            self.rng.shuffle(keys)
        lines = [f"[{kind}]" if kind == "project" else self.rng.choice([f"[[{kind}]]", f"[[{kind}]]", f"[[ {kind} ]]"])]
        below: list[str] = []
        for key in keys:
            lines += [f"# about {key}: [[not]] = 'a' \"key\""] if self.rng.random() < comments / 2 else []
            self.entry(kind, key, entry[key], lines, below)
        for place, line in enumerate(lines):
            if "\n" not in line and self.rng.random() < comments:
                lines[place] = line + "  # as issued"
        return "\n".join(lines + below) + "\n"

    def entry(self, kind: str, key: str, value: Any, lines: list[str], below: list[str]) -> None:
        """One key: in the block itself, or, for a table, as dotted keys or as a sub-table below it."""
        style = self.rng.choice(["inline", "dotted", "below"])
        if not isinstance(value, dict) or style == "inline" or not value:
            lines.append(self.pair(self.key(key), value))
        elif style == "dotted":
            lines += [self.pair(f"{self.key(key)}.{self.key(inner)}", value[inner]) for inner in value]
        else:
            below.append(f"[{kind}.{self.key(key)}]")
            below += [self.pair(self.key(inner), value[inner]) for inner in value]

    def pair(self, key: str, value: Any) -> str:
        """A key and its value."""
        return key + self.rng.choice([" = ", " = ", "=", "   = "]) + self.value(value)

    def key(self, key: str) -> str:
        """A key, quoted where it must be and now and then where it need not."""
        bare = re.fullmatch(r"[A-Za-z0-9_-]+", key)
        return key if bare and self.rng.random() < 0.95 else self.string(key)

    def value(self, value: Any) -> str:
        """Any value."""
        if isinstance(value, bool):
            return "true" if value else "false"
        if isinstance(value, str):
            return self.string(value)
        if isinstance(value, dict):
            return self.inline(value)
        return self.array(value) if isinstance(value, list) else self.number(value)

    def inline(self, table: Table) -> str:
        """A table on one line (but for its arrays)."""
        inner = ", ".join(self.pair(self.key(key), table[key]) for key in table)
        return f"{{ {inner} }}" if inner else "{}"

    def array(self, values: list[Any]) -> str:
        """An array on one line, or on several with comments and a comma at its end."""
        items = [self.value(value) for value in values]
        if not items or self.rng.random() < 0.85:
            return self.rng.choice(["[{}]", "[ {} ]"]).format(", ".join(items))
        comment = self.rng.choice(["", "  # row ] here", "\n"])
        return "[" + comment + "\n" + "".join(f"    {item},{comment}\n" for item in items) + "]"

    def number(self, value: float) -> str:
        """A number: with or without a point, an exponent, a sign, underscores."""
        draw = self.rng.random()
        if float(value).is_integer() and abs(value) < 1e15:
            whole = int(value)
            spelled = [str(whole), f"{whole:_}", f"{whole}.0", f"{whole:_}.0", f"{whole:+}"]
            return spelled[int(draw * len(spelled))]
        exponent = f"{value:.17e}"
        return exponent if draw < 0.05 and float(exponent) == value else repr(float(value))

    def string(self, text: str) -> str:
        """A string in one of the spellings of TOML that can hold it."""
        draw = self.rng.random()
        if draw < 0.25 and "'" not in text and "\n" not in text:
            return f"'{text}'"
        basic = json.dumps(text, ensure_ascii=draw < 0.35)
        return basic if "\\n" not in basic or draw < 0.5 else '"""\n' + text.replace("\\", "\\\\") + '"""'


# A large one


def large_project(points: int, cases: int, loads: int, seed: int) -> str:
    """A project of a given size: every state general, every 20th point with direct rows, every 10th case combined."""
    rng = Random(seed)
    lines = ["format = 1", "[project]", 'title = "Large"', 'revision = "A"', 'units = "mm-N-MPa"']
    lines += [f'components = "{" ".join(ORDER)}"', 'accept = "both"', "thin = 0.1"]
    lines += ['[[category]]\nname = "normal"\nloads = "characteristic"\nyield = 1.5\nultimate = 2.0']
    lines += ['[[category]]\nname = "test"\nloads = "characteristic"\nyield = { tresca = 1.1, von-mises = 1.2 }']
    for i, strength in enumerate((225.0, 345.0, 275.0)):
        lines += [f'[[material]]\nname = "M{i}"\nsource = "invented"']
        lines += [f"yield = {strength}\nultimate = {strength * 1.5}"]
    lines += [f'[[load]]\nname = "F{i:03d}"' for i in range(loads)]
    lines += [large_case(rng, i, loads) for i in range(cases)]
    lines += [large_point(rng, i, cases, loads) for i in range(points)]
    return "\n".join(lines) + "\n"


def large_case(rng: Random, i: int, loads: int) -> str:
    """A case with a magnitude of every load, or a combination of two before it."""
    lines = [f'[[case]]\nname = "LC{i:04d}"\ncategory = "{"normal" if i % 3 else "test"}"']
    if i % 10 == 9:
        lines.append(f"combine = {{ LC{i - 1:04d} = 1.1, LC{i - 2:04d} = {rng.uniform(0.1, 0.9):.3f} }}")
    else:
        magnitudes = ", ".join(f"F{j:03d} = {rng.uniform(-1000.0, 1000.0):.2f}" for j in range(loads))
        lines.append(f"loads = {{ {magnitudes} }}")
    return "\n".join(lines)


def large_point(rng: Random, i: int, cases: int, loads: int) -> str:
    """A point with a unit-load row for every load, or with a direct row for every case that is not combined."""
    lines = [f'[[point]]\nname = "P{i:04d}"\npart = "part {i % 7}"\nmaterial = "M{i % 3}"\nsource = "invented"']
    if i % 20 == 19:
        lines.append("[point.stress]")
        lines += [f"LC{j:04d} = {large_row(rng, 60.0)}" for j in range(cases) if j % 10 != 9]
    else:
        lines.append("[point.per-load]")
        lines += [f"F{j:03d} = {large_row(rng, 0.06 / max(loads, 1) ** 0.5)}" for j in range(loads)]
    return "\n".join(lines)


def large_row(rng: Random, size: float) -> str:
    """Six components of about this size."""
    return "[" + ", ".join(f"{rng.gauss(0.0, size):.5g}" for _ in range(6)) + "]"
